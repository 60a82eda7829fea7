namespace CycleSim.Notebooks

open System
open CycleSim.Engine
open CycleSim.Matching
open CycleSim.Reports
open CycleSim.Studies

/// What the studies find.
module internal StudySheets =
    /// Rows of a table that a cell shows; the whole is in the file that TableFile writes.
    let private rowsShown = 40

    let private limits (limits: Limit seq) (implied: Nullable<Limit>) = [
        for limit in limits ->
            let from =
                if implied.HasValue && implied.Value = limit then
                    " (from thrust and flat_to)"
                else
                    ""

            "limit", Figures.limit limit + from
    ]

    let ofRating (rating: Rating) = {
        Title = $"Rating {rating.Definition.Name}"
        Parts = [
            Facts [
                "flat to", $"ISA {Figures.offset rating.FlatTo} K"
                "flat thrust static at sea level", $"{Figures.force (rating.FlatThrust(0.0, 0.0))} kN"
                yield! limits rating.Limits rating.ImpliedLimit
            ]
            Sheet.caution
        ]
    }

    let private flatRatingRow flat (row: FlatRatingRow) =
        let where = [
            Figures.celsius (float row.OutsideTemperature)
            Figures.offset (float row.IsaOffset)
        ]

        match row.Point with
        | null -> where @ [ $"no point: {row.Reason}" ] @ List.replicate 8 Figures.none
        | p ->
            where
            @ [
                row.Governing
                Figures.force p.NetThrust
                Figures.percent 2 (p.NetThrust / flat)
                Figures.percent 2 p.Spools[0].RelativeSpeed
                Figures.decimals 4 p.EnginePressureRatio
                Figures.temperature p.T41
                Figures.temperature p.T45
                Figures.fuelFlow p.FuelFlow
                Figures.sfc p.Sfc
            ]

    let ofFlatRating (s: FlatRatingResult) = {
        Title =
            $"{s.Engine}, rating {s.Rating}: {Figures.decimals 0 (float s.PressureAltitude)} m pressure altitude, Mach {Figures.decimals 3 s.Mach}"
        Parts = [
            Facts [
                "flat thrust", $"{Figures.force (float s.FlatThrust)} kN"
                "break temperature",
                $"{Figures.decimals 2 (float s.BreakTemperature)} K = {Figures.celsius (float s.BreakTemperature)} °C "
                + $"(ISA {Figures.offset (float s.BreakIsaOffset)} K), where {Figures.limit s.BreakLimit}"
                "lapse beyond it",
                $"{Figures.percent 2 (float s.LapsePerKelvin)} %% of the flat thrust per K, over the first 10 K"
                yield! limits s.Limits s.ImpliedLimit
            ]
            Grid {
                Title = "Power setting and thrust against outside temperature"
                TextColumns = 0
                Columns = [
                    "OAT °C"
                    "ISA K"
                    "set by"
                    "net thrust kN"
                    "of flat %"
                    "N1 %"
                    "EPR"
                    "T41 K"
                    "T45 K"
                    "fuel kg/s"
                    "SFC g/(kN s)"
                ]
                Rows = s.Rows |> Seq.map (flatRatingRow (float s.FlatThrust)) |> Seq.toList
            }
            Remark
                $"Break solved directly in {s.BreakIterations} iterations, largest relative imbalance {Figures.small s.BreakResidual}."
            Sheet.caution
        ]
    }

    let private budget (b: MarginBudget) = [
        b.Compressor
        Figures.decimals 0 (float b.Thinnest.PressureAltitude)
        Figures.decimals 3 b.Thinnest.Mach
        Figures.offset (float b.Thinnest.IsaOffset)
        Figures.percent 0 b.Thinnest.ThrustShare
        Figures.percent 1 b.Thinnest.RelativeCorrectedSpeed
        Figures.percent 1 b.Thinnest.MarginConstantFlow
        Figures.percent 1 b.Thinnest.MarginConstantSpeed
        Figures.percent 1 b.Required
        Figures.percent 1 b.Slack
    ]

    let private allowances (b: MarginBudget) = {
        Title = $"Allowances of {b.Compressor}: systematic ones add up, random ones by root of the sum of squares"
        TextColumns = 2
        Columns = [ "allowance"; "kind"; "%" ]
        Rows = [
            for a in b.Allowances do
                [
                    a.Name
                    (if a.Random then "random" else "systematic")
                    Figures.percent 1 a.Allowance
                ]
            [ "required"; ""; Figures.percent 1 b.Required ]
        ]
    }

    let ofSurgeSurvey (s: SurgeSurveyResult) = {
        Title =
            $"{s.Engine}: surge margins from rating {s.Rating} downwards; {s.Points} points, {s.WithoutSolution.Count} without solution"
        Parts = [
            Grid {
                Title = "Thinnest margin of each compressor against what it needs"
                TextColumns = 1
                Columns = [
                    "compressor"
                    "altitude m"
                    "Mach"
                    "ISA K"
                    "thrust %"
                    "corrected speed %"
                    "margin, flow %"
                    "margin, speed %"
                    "required %"
                    "slack %"
                ]
                Rows = s.Budgets |> Seq.map budget |> Seq.toList
            }
            for b in s.Budgets do
                FoldedGrid(allowances b)
            Sheet.caution
        ]
    }

    let ofRequiredRating (r: RequiredRating) =
        let orReason value reason =
            if Double.IsNaN value then
                Figures.none + $" ({reason})"
            else
                $"ISA {Figures.offset value} K"

        {
            Title =
                $"{r.Engine}: what rating {r.Rating} would have to be for {Figures.force (float r.Wanted)} kN at "
                + $"{Figures.decimals 0 (float r.PressureAltitude)} m, Mach {Figures.decimals 3 r.Mach}, {Figures.celsius (float r.OutsideTemperature)} °C"
            Parts = [
                Facts [
                    "rated thrust there now", $"{Figures.force (float r.Rated)} kN, held by {r.Governing}"
                    "hottest day with the wanted thrust now",
                    if Double.IsNaN(float r.HottestNow) then
                        Figures.none + $" ({r.HottestReason})"
                    else
                        $"{Figures.celsius (float r.HottestNow)} °C"
                    "flat to, now", $"ISA {Figures.offset (float r.FlatToNow)} K"
                    "flat to, needed", orReason (float r.FlatToNeeded) r.FlatToReason
                    "sea-level thrust, now", $"{Figures.force (float r.SeaLevelThrustNow)} kN"
                    "sea-level thrust, needed", $"{Figures.force (float r.SeaLevelThrustNeeded)} kN"
                ]
                Grid {
                    Title = "Limits at the wanted thrust"
                    TextColumns = 1
                    Columns = [ "limit"; "needed"; "exceeded" ]
                    Rows = [
                        for l in r.Limits ->
                            [
                                Figures.limit l.Limit
                                QuantityText.Format(l.Limit.Quantity, l.Needed)
                                Figures.yesNo l.Exceeded
                            ]
                    ]
                }
                Sheet.caution
            ]
        }

    let ofBreakEffects (effects: BreakEffect seq) = {
        Title = "What moves the break, each load alone, flat thrust held"
        Parts = [
            Grid {
                Title = ""
                TextColumns = 1
                Columns = [ "load"; "break °C"; "shift K"; "thrust at the break without it kN" ]
                Rows = [
                    for e in effects ->
                        [
                            e.Load
                            Figures.celsius (float e.BreakTemperature)
                            Figures.offset (float e.Shift)
                            Figures.force (float e.ThrustThere)
                        ]
                ]
            }
            Sheet.caution
        ]
    }

    let private penalty (p: Penalty) = [
        p.Name
        Figures.signedPercent p.AtThrust.Full.FuelFlow
        Figures.offset (float p.AtThrust.Full.T41)
        Figures.offset (float p.AtThrust.Full.T45)
        Figures.signedPercent p.AtLimit.Full.NetThrust
        Figures.signedPercent p.AtLimit.FirstOrder.NetThrust
        Figures.offset (float p.Break)
    ]

    let private penalties title (rows: Penalty seq) = {
        Title = title
        TextColumns = 1
        Columns = [
            ""
            "fuel at thrust %"
            "T41 at thrust K"
            "T45 at thrust K"
            "thrust at limit %"
            "the same, first order %"
            "break K"
        ]
        Rows = rows |> Seq.map penalty |> Seq.toList
    }

    let private service (s: Service) = [
        s.Need
        s.Source
        (match s.Kind with
         | LoadKind.Power -> $"{Figures.power s.Amount} kW"
         | _ -> $"{Figures.flow s.Amount} kg/s")
        Figures.pressure (float s.SupplyPressure)
        Figures.temperature (float s.SupplyTemperature)
        Figures.finePercent s.Sfc
        Figures.finePercent s.NetThrust
        (if s.Reason = "" then Figures.none else s.Reason)
    ]

    let ofPenalties (p: PenaltiesResult) = {
        Title =
            $"{p.Engine}, rating {p.Rating}: bleed and power penalties at {Figures.decimals 0 p.AtThrust.Flight.PressureAltitude} m, Mach {Figures.decimals 3 p.AtThrust.Flight.Mach}"
        Parts = [
            Facts [
                "net thrust held", $"{Figures.force p.AtThrust.NetThrust} kN"
                "limit held",
                Figures.limit p.Limit
                + (if p.LimitHeldAtBreak then
                       " at the break, for the rating is flat here"
                   else
                       "")
                "break temperature without the loads",
                $"{Figures.celsius (float p.BreakTemperature)} °C, where {Figures.limit p.BreakLimit}"
            ]
            if p.Loads.Count > 0 then
                Grid(penalties "Loads, solved anew" [ yield! p.Loads; p.Together ])
            FoldedGrid(penalties "One per cent or one kg/s of every port, one kW of every spool" p.PerUnit)
            Grid {
                Title = "Each need from every source that could serve it, cheapest first"
                TextColumns = 3
                Columns = [
                    "need"
                    "source"
                    "amount"
                    "supply kPa"
                    "supply K"
                    "SFC %"
                    "thrust at limit %"
                    "why not"
                ]
                Rows = p.Ranking |> Seq.map service |> Seq.toList
            }
            Sheet.caution
        ]
    }

    let ofInfluence (influence: Influence) = {
        Title = "Influence coefficients: exact derivatives with the power setting held, SI over SI"
        Parts = [
            Grid {
                Title = "Rows are inputs, columns are outputs"
                TextColumns = 1
                Columns = "input" :: Seq.toList influence.Outputs
                Rows = [
                    for input in 0 .. influence.Inputs.Count - 1 ->
                        influence.Inputs[input]
                        :: [
                            for output in 0 .. influence.Outputs.Count - 1 -> Figures.general influence[output, input]
                        ]
                ]
            }
        ]
    }

    let ofTable (table: StudyTable) =
        let shown = min table.Rows rowsShown

        {
            Title = table.Title
            Parts = [
                Facts [ for entry in table.Provenance -> entry.Key, entry.Value ]
                Grid {
                    Title =
                        if shown < table.Rows then
                            $"First {shown} of {table.Rows} rows"
                        else
                            $"{table.Rows} rows"
                    TextColumns = 0
                    Columns = [
                        for c in table.Columns -> if c.Unit = "" then c.Name else $"{c.Name} [{c.Unit}]"
                    ]
                    Rows = [
                        for row in 0 .. shown - 1 ->
                            [
                                for c in table.Columns ->
                                    if c.IsText then
                                        c.Texts[row]
                                    else
                                        Figures.general c.Numbers[row]
                            ]
                    ]
                }
            ]
        }

    let ofSweep (summary: SweepSummary) = {
        Title =
            $"Sweep: {summary.Points} points, {summary.Solved} solved, in {Figures.decimals 1 summary.Seconds} s ({Figures.decimals 0 summary.PointsPerSecond} points/s)"
        Parts = [
            Facts [
                "outside the corridor", string summary.OutsideCorridor
                "left by an earlier run", string summary.Resumed
                for ending in summary.WithoutSolution do
                    ending.Key, string ending.Value
            ]
        ]
    }
