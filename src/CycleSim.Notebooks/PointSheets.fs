namespace CycleSim.Notebooks

open CycleSim.Engine
open CycleSim.Reports

/// An operating point, and its parts where a cell shows one of them alone.
module internal PointSheets =
    let private performance (p: OperatingPoint) =
        Facts [
            "net thrust",
            $"{Figures.force p.NetThrust} kN (gross {Figures.force p.GrossThrust}, ram drag {Figures.force p.RamDrag})"
            if p.InstalledThrust <> p.NetThrust then
                "installed thrust", $"{Figures.force p.InstalledThrust} kN, net of nacelle drag and scrubbing"
            "fuel flow", $"{Figures.fuelFlow p.FuelFlow} kg/s (fuel-air ratio {Figures.decimals 5 p.FuelAirRatio})"
            "SFC", $"{Figures.sfc p.Sfc} g/(kN s)"
            "bypass ratio", Figures.decimals 3 p.BypassRatio
            "pressure ratios",
            $"overall P3/P2 {Figures.decimals 3 p.OverallPressureRatio}, engine P5/P2 {Figures.decimals 4 p.EnginePressureRatio}"
            "temperatures",
            $"T4 {Figures.temperature p.T4}, T41 {Figures.temperature p.T41}, T45 {Figures.temperature p.T45} K"
            "lever", $"{Figures.percent 1 p.LeverPosition} %%"
            "efficiencies",
            $"thermal {Figures.percent 1 p.ThermalEfficiency}, propulsive {Figures.percent 1 p.PropulsiveEfficiency}, overall {Figures.percent 1 p.OverallEfficiency} %%"
        ]

    let private stations (reports: StationReport seq) = {
        Title = "Stations (SAE AS755), total states"
        TextColumns = 2
        Columns = [ "station"; "plane"; "W kg/s"; "Tt K"; "Pt kPa"; "fuel-air ratio" ]
        Rows = [
            for s in reports ->
                [
                    s.Number
                    s.Plane
                    Figures.flow s.MassFlow
                    Figures.temperature s.TotalTemperature
                    Figures.pressure s.TotalPressure
                    Figures.decimals 5 s.FuelAirRatio
                ]
        ]
    }

    let private compressors (reports: CompressorReport seq) = {
        Title = "Compressors (surge margin at constant corrected flow and at constant corrected speed)"
        TextColumns = 1
        Columns = [
            ""
            "PR"
            "isentropic %"
            "polytropic %"
            "corrected kg/s"
            "corrected speed %"
            "power kW"
            "margin, flow %"
            "margin, speed %"
        ]
        Rows = [
            for c in reports ->
                [
                    c.Name
                    Figures.decimals 4 c.PressureRatio
                    Figures.percent 2 c.IsentropicEfficiency
                    Figures.percent 2 c.PolytropicEfficiency
                    Figures.flow c.CorrectedFlow
                    Figures.percent 2 c.RelativeCorrectedSpeed
                    Figures.power c.Power
                    Figures.percent 1 c.SurgeMarginConstantFlow
                    Figures.percent 1 c.SurgeMarginConstantSpeed
                ]
        ]
    }

    let private turbines (reports: TurbineReport seq) = {
        Title = "Turbines"
        TextColumns = 1
        Columns = [ ""; "expansion"; "isentropic %"; "work kJ/kg"; "power kW"; "choked" ]
        Rows = [
            for t in reports ->
                [
                    t.Name
                    Figures.decimals 4 t.ExpansionRatio
                    Figures.percent 2 t.IsentropicEfficiency
                    Figures.decimals 2 (t.SpecificWork / 1e3)
                    Figures.power t.Power
                    Figures.yesNo t.Choked
                ]
        ]
    }

    let private spools (reports: SpoolReport seq) = {
        Title = "Spools"
        TextColumns = 1
        Columns = [ ""; "speed % of design"; "speed rpm"; "turbine power kW"; "offtake kW" ]
        Rows = [
            for s in reports ->
                [
                    s.Name
                    Figures.percent 2 s.RelativeSpeed
                    Figures.decimals 0 s.Rpm
                    Figures.power s.TurbinePower
                    Figures.power s.Offtake
                ]
        ]
    }

    let private nozzles (reports: NozzleReport seq) = {
        Title = "Nozzles"
        TextColumns = 1
        Columns = [ ""; "P/Pamb"; "exit m/s"; "effective throat m2"; "gross thrust kN"; "choked" ]
        Rows = [
            for n in reports ->
                [
                    n.Name
                    Figures.decimals 4 n.PressureRatio
                    Figures.decimals 1 n.ExitSpeed
                    Figures.decimals 4 n.EffectiveArea
                    Figures.force n.GrossThrust
                    Figures.yesNo n.Choked
                ]
        ]
    }

    let private air (reports: StreamReport seq) = {
        Title = "Air taken from the compressors"
        TextColumns = 3
        Columns = [ ""; "from"; "to"; "W kg/s"; "Tt K"; "Pt kPa" ]
        Rows = [
            for a in reports ->
                [
                    a.Name
                    a.From
                    a.To
                    Figures.flow a.MassFlow
                    Figures.temperature a.TotalTemperature
                    Figures.pressure a.TotalPressure
                ]
        ]
    }

    let private balances (audit: Audit) = {
        Title = "Balances drawn up anew from the stations"
        TextColumns = 1
        Columns = [ ""; "mass"; "energy"; "entropy production W/K" ]
        Rows = [
            for line in Seq.append audit.Components [ audit.Whole ] ->
                [
                    line.Component
                    Figures.small line.MassImbalance
                    Figures.small line.EnergyImbalance
                    Figures.decimals 2 line.EntropyProduction
                ]
        ]
    }

    let ofPoint (p: OperatingPoint) = {
        Title =
            $"{p.EngineName} at {Figures.decimals 0 p.Flight.PressureAltitude} m, Mach {Figures.decimals 3 p.Flight.Mach}, "
            + $"{Figures.temperature p.Flight.StaticTemperature} K (ISA {Figures.offset p.Flight.IsaOffset} K), "
            + $"power set by {Figures.limit p.Setting}"
        Parts = [
            performance p
            Grid(stations p.Stations)
            Grid(compressors p.Compressors)
            FoldedGrid(turbines p.Turbines)
            FoldedGrid(spools p.Spools)
            FoldedGrid(nozzles p.Nozzles)
            FoldedGrid(air p.Air)
            FoldedGrid(balances p.Audit)
            Remark
                $"Solved in {p.Outcome.Iterations} iterations, largest relative imbalance {Figures.small p.Outcome.Residual}; mass and energy close to {Figures.small p.Audit.LargestImbalance}."
            Sheet.caution
        ]
    }

    let private alone title grid = {
        Title = title
        Parts = [ Grid { grid with Title = "" } ]
    }

    let ofStations reports =
        alone "Stations (SAE AS755), total states" (stations reports)

    let ofCompressors reports =
        alone
            "Compressors (surge margin at constant corrected flow and at constant corrected speed)"
            (compressors reports)

    let ofAir reports =
        alone "Air taken from the compressors" (air reports)

    // The governing limit is met to the solver's last digits; they must not read as exceeded.
    let private left (m: LimitMargin) =
        if abs m.Left < 1e-9 * m.Limit.Value then 0.0 else m.Left

    let ofMargins (margins: LimitMargin seq) = {
        Title = "Left before each limit; below zero where it is exceeded"
        Parts = [
            Grid {
                Title = ""
                TextColumns = 2
                Columns = [ "rating"; "limit"; "at the point"; "left" ]
                Rows = [
                    for m in margins ->
                        [
                            m.Rating
                            Figures.limit m.Limit
                            QuantityText.Format(m.Limit.Quantity, m.Value)
                            QuantityText.Format(m.Limit.Quantity, left m)
                        ]
                ]
            }
            Sheet.caution
        ]
    }
