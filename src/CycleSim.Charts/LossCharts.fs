namespace CycleSim.Charts

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Reports
open CycleSim.Studies
open Plotly.NET

/// Something that costs or gains, with its size in the unit of the chart.
type NamedAmount = { Name: string; Amount: float }

/// What things cost: penalties, losses, sensitivities, margin budgets.
[<AbstractClass; Sealed>]
type LossCharts private () =

    static let bars name (names: string[]) (values: float[]) (notes: string[]) index (fields: (string * objnull) seq) =
        ChartStyle.trace "bar" [
            "name", box name
            "orientation", box "h"
            "y", box names
            "x", ChartStyle.numbers values
            "text", box notes
            "textposition", box "outside"
            "cliponaxis", box false
            "textfont", box (ChartStyle.make [ "size", box 12; "color", box ChartStyle.ink ])
            "hovertemplate", box "%{y}: %{text}<extra></extra>"
            "marker", box (ChartStyle.make [ "color", box (ChartStyle.colour index) ])
            yield! fields
        ]

    static let zero = [
        "zeroline", box true
        "zerolinecolor", box ChartStyle.ink
        "zerolinewidth", box 1.5
    ]

    // Room for the numbers beyond the ends of the bars.
    static let across title (values: float seq) =
        let known =
            values |> Seq.filter Double.IsFinite |> Seq.append [ 0.0 ] |> Seq.toArray

        let low, high = Array.min known, Array.max known
        let room = 0.18 * max (high - low) 1e-9

        ChartStyle.axis title [
            yield! zero
            "range",
            box [|
                (if low < 0.0 then low - room else 0.0)
                (if high > 0.0 then high + room else 0.0)
            |]
        ]

    static let categories (fields: (string * objnull) seq) =
        ChartStyle.axis "" [
            "type", box "category"
            "autorange", box "reversed"
            "showgrid", box false
            yield! fields
        ]

    // "sfc_kg_per_N_s" as the trade writes it.
    static let plain (output: string) =
        let stem =
            [ "_kg_per_N_s"; "_kg_per_s"; "_Pa"; "_K"; "_N"; "_W" ]
            |> List.tryFind (fun unit -> output.EndsWith(unit, StringComparison.Ordinal))
            |> Option.map (fun unit -> output[.. output.Length - unit.Length - 1])
            |> Option.defaultValue output

        if stem = "sfc" then "SFC" else stem.Replace('_', ' ')

    static let signed (value: float) (digits: int) (unit: string) =
        if Double.IsFinite value then
            let text = (if value > 0.0 then "+" else "") + ChartUnits.Text(value, digits)
            if unit = "" then text else text + " " + unit
        else
            "no point"

    /// <summary>
    /// What each named load costs: SFC at constant thrust beside thrust at the rating's limit, from full solutions, per cent.
    /// </summary>
    /// <param name="together">whether all loads at once are shown too, where there are several</param>
    /// <exception cref="T:System.ArgumentException">No loads.</exception>
    static member Penalties
        (result: PenaltiesResult, [<Optional; DefaultParameterValue(true)>] together: bool)
        : GenericChart =
        if result.Loads.Count = 0 then
            raise (ArgumentException "a chart of no loads")

        let loads = [|
            yield! result.Loads
            if together && result.Loads.Count > 1 then
                result.Together
        |]

        let without =
            loads
            |> Seq.collect (fun l -> [ l.AtThrust.Reason; l.AtLimit.Reason ])
            |> Seq.filter (fun reason -> reason <> "")
            |> ChartStyle.missing "Answers"

        let names = loads |> Array.map _.Name
        let sfc = loads |> Array.map (fun l -> 100.0 * l.AtThrust.Full.Sfc)
        let thrust = loads |> Array.map (fun l -> 100.0 * l.AtLimit.Full.NetThrust)

        ChartStyle.chart
            $"{result.Engine}: what the loads cost"
            [|
                bars "SFC at constant thrust" names sfc (sfc |> Array.map (fun v -> signed v 2 "%")) 0 []
                bars
                    $"thrust at the limit of {result.Rating}"
                    names
                    thrust
                    (thrust |> Array.map (fun v -> signed v 2 "%"))
                    3
                    []
            |]
            (across "Change, %" (Seq.append sfc thrust))
            (categories []) [ ChartStyle.cautioned $"Full solutions, not first order. {without}" ] [
                "barmode", box "group"
                "bargap", box 0.3
                // Bars thinner than their numbers would shrink them.
                "height", box (max 545 (205 + 50 * loads.Length))
            ]

    /// <summary>From a total through what is taken off (or added) to what is left, in one unit.</summary>
    /// <param name="start">name and amount of the beginning</param>
    /// <param name="changes">signed changes in order</param>
    /// <param name="last">name of what is left</param>
    /// <param name="unit">unit of all amounts, for instance "kN" or "%"</param>
    /// <exception cref="T:System.ArgumentException">No changes.</exception>
    static member Waterfall
        (title: string, start: NamedAmount, changes: IReadOnlyList<NamedAmount>, last: string, unit: string)
        : GenericChart =
        if changes.Count = 0 then
            raise (ArgumentException "a waterfall without changes")

        let left = start.Amount + (changes |> Seq.sumBy _.Amount)
        let digits = if abs start.Amount >= 1000.0 then 0 else 2
        let names = [| start.Name; yield! changes |> Seq.map _.Name; last |]

        let trace =
            ChartStyle.trace "waterfall" [
                "orientation", box "v"
                "measure", box [| "absolute"; yield! changes |> Seq.map (fun _ -> "relative"); "total" |]
                "x", box names
                "y", ChartStyle.numbers [ start.Amount; yield! changes |> Seq.map _.Amount; left ]
                "text",
                box [|
                    ChartUnits.Text(start.Amount, digits)
                    yield! changes |> Seq.map (fun c -> signed c.Amount digits "")
                    ChartUnits.Text(left, digits)
                |]
                "textposition", box "outside"
                "hovertemplate", box $"%%{{x}}: %%{{text}} {unit}<extra></extra>"
                "connector", box (ChartStyle.make [ "line", ChartStyle.line "#888888" 1.0 "dot" ])
                "decreasing",
                box (ChartStyle.make [ "marker", box (ChartStyle.make [ "color", box ChartStyle.colours[1] ]) ])
                "increasing",
                box (ChartStyle.make [ "marker", box (ChartStyle.make [ "color", box ChartStyle.colours[2] ]) ])
                "totals",
                box (ChartStyle.make [ "marker", box (ChartStyle.make [ "color", box ChartStyle.colours[0] ]) ])
            ]

        ChartStyle.chart
            title
            [| trace |]
            (ChartStyle.axis "" [ "type", box "category"; "showgrid", box false ])
            (ChartStyle.axis unit zero) [] [ "showlegend", box false ]

    /// <summary>
    /// What moves an output most: its relative change, per cent, for a step of each input, largest first, from exact influence
    /// coefficients.
    /// </summary>
    /// <param name="influence">coefficients at a point, its power setting held</param>
    /// <param name="output">name with unit, as in <see cref="P:CycleSim.Reports.Influence.Outputs"/></param>
    /// <param name="steps">step of each input by its name (SI): 0.01 of a factor, 0.01 of a bleed share, 100e3 W ...</param>
    /// <param name="most">how many inputs are shown</param>
    /// <exception cref="T:System.ArgumentException">No such output or input, or no steps.</exception>
    static member Tornado
        (
            title: string,
            influence: Influence,
            output: string,
            steps: IReadOnlyList<NamedAmount>,
            [<Optional; DefaultParameterValue(15)>] most: int
        ) : GenericChart =
        if steps.Count = 0 then
            raise (ArgumentException "a tornado without steps")

        let at =
            match influence.Outputs |> Seq.tryFindIndex (fun o -> o = output) with
            | Some found -> found
            | None ->
                let known = String.concat ", " influence.Outputs
                raise (ArgumentException $"no output '{output}' among {known}")

        let basis = influence.OutputValues[at]

        let effects =
            steps
            |> Seq.map (fun s -> s, 100.0 * influence.Of(output, s.Name) * s.Amount / basis)
            // What would be written as nothing is left out.
            |> Seq.filter (fun (_, e) -> abs e >= 0.005)
            |> Seq.sortByDescending (fun (_, e) -> abs e)
            |> Seq.truncate most
            |> Seq.toArray

        let percent amount = signed (100.0 * amount) 1 "%"

        let shown (step: NamedAmount) =
            if step.Name.EndsWith "_W" then
                $"{step.Name[.. step.Name.Length - 3]} {step.Amount / 1000.0:G4} kW"
            elif step.Name.Contains "fraction" || step.Name.Contains "factor" then
                $"{step.Name} {percent step.Amount}"
            else
                $"{step.Name} {step.Amount:G4}"

        let values = effects |> Array.map snd

        ChartStyle.chart
            title
            [|
                bars
                    output
                    (effects |> Array.map (fun (s, _) -> (shown s).Replace('_', ' ')))
                    values
                    (values |> Array.map (fun v -> signed v 2 "%"))
                    0
                    [
                        "marker",
                        box (
                            ChartStyle.make [
                                "color",
                                box (values |> Array.map (fun v -> ChartStyle.colours[if v < 0.0 then 0 else 3]))
                            ]
                        )
                    ]
            |]
            (across $"Change of {plain output}, %% of its value" values)
            (categories []) [
                ChartStyle.note "First order, from exact influence coefficients; power setting held."
            ] [ "showlegend", box false ]

    /// <summary>Surge margin that each compressor needs, allowance by allowance, against what it has at its thinnest.</summary>
    /// <param name="units">units of the places in the notes; SI where null</param>
    static member SurgeBudget
        (
            result: SurgeSurveyResult,
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null
        ) : GenericChart =
        let units =
            match units with
            | null -> ChartUnits.SI
            | given -> given

        let budgets = Seq.toArray result.Budgets
        let names = budgets |> Array.map _.Compressor

        let kinds =
            budgets
            |> Array.collect (fun b -> b.Allowances |> Seq.map _.Name |> Seq.toArray)
            |> Array.distinct

        // Random allowances combine by root of the sum of squares: each is drawn with its share of that root.
        let drawn (budget: MarginBudget) kind =
            match budget.Allowances |> Seq.tryFind (fun a -> a.Name = kind) with
            | None -> 0.0
            | Some a when not a.Random -> a.Allowance
            | Some a ->
                let squares =
                    budget.Allowances
                    |> Seq.filter _.Random
                    |> Seq.sumBy (fun r -> r.Allowance * r.Allowance)

                a.Allowance * a.Allowance / sqrt squares

        let needed =
            kinds
            |> Array.mapi (fun k kind ->
                let values = budgets |> Array.map (fun b -> 100.0 * drawn b kind)

                bars kind names values (values |> Array.map (fun v -> ChartUnits.Text(v, 1) + " %")) k [
                    "textposition", box "none"
                    "marker",
                    box (
                        ChartStyle.make [
                            "color", box (ChartStyle.colour k)
                            "line", box (ChartStyle.make [ "color", box "white"; "width", box 1 ])
                            "pattern",
                            box (
                                ChartStyle.make [
                                    "shape", box (ChartStyle.of' ChartStyle.fillings k)
                                    "fillmode", box "overlay"
                                    "size", box 7
                                ]
                            )
                        ]
                    )
                ])

        let available =
            ChartStyle.trace "scatter" [
                "name", box "available at the thinnest"
                "mode", box "markers"
                "y", box names
                "x", ChartStyle.numbers (budgets |> Array.map (fun b -> 100.0 * b.Thinnest.MarginConstantFlow))
                "text",
                box (
                    budgets
                    |> Array.map (fun b ->
                        $"{b.Compressor}: {100.0 * b.Thinnest.MarginConstantFlow:F1} %% at {units.AltitudeText(float b.Thinnest.PressureAltitude)}, Mach {b.Thinnest.Mach:F2}, ISA {float b.Thinnest.IsaOffset:F0} K, {100.0 * b.Thinnest.ThrustShare:F0} %% of the rating; slack {100.0 * b.Slack:F1} points")
                )
                "hovertemplate", box "%{text}<extra></extra>"
                "marker",
                box (
                    ChartStyle.make [
                        "size", box 15
                        "symbol", box "diamond"
                        "color", box ChartStyle.ink
                        "line", box (ChartStyle.make [ "width", box 2; "color", box "white" ])
                    ]
                )
            ]

        ChartStyle.chart
            $"{result.Engine}: surge margin needed and available"
            [| yield! needed; available |]
            (ChartStyle.axis "Surge margin at constant flow, % of pressure ratio" zero)
            (categories []) [
                ChartStyle.cautioned
                    "Bars: what is needed; random allowances by their share of the root of the sum of squares. Diamond: what there is at the thinnest."
            ] [ "barmode", box "stack" ]
