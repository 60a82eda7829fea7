namespace CycleSim.Definitions;

/// <summary>One key of a definition file: the reader checks by it and the reference page is written from it.</summary>
internal sealed record KeySpec(
    string Name,
    Dimension Dimension,
    string Meaning,
    double Least = double.NegativeInfinity,
    double Most = double.PositiveInfinity,
    bool LeastAllowed = true,
    bool MostAllowed = true,
    bool Required = false,
    string Default = "",
    string[]? Choices = null,
    string? Example = null
)
{
    public string Range =>
        Choices is not null ? string.Join(", ", Choices.Select(c => $"\"{c}\""))
        : double.IsInfinity(Least) && double.IsInfinity(Most) ? ""
        : double.IsInfinity(Most) ? (LeastAllowed ? $"at least {Show(Least)}" : $"above {Show(Least)}")
        : $"{(LeastAllowed ? "" : "above ")}{Show(Least)} to {(MostAllowed ? "" : "below ")}{Show(Most)}";

    public bool Holds(double value) =>
        (LeastAllowed ? value >= Least : value > Least) && (MostAllowed ? value <= Most : value < Most);

    private string Show(double value) =>
        Dimension switch
        {
            Dimension.Length => $"{value:0} m",
            Dimension.Temperature or Dimension.TemperatureDifference => $"{value:0.##} K",
            Dimension.Pressure => $"{value / 1000.0:0.##} kPa",
            _ => FormattableString.Invariant($"{value:0.####}"),
        };
}

/// <summary>One table of a definition file.</summary>
internal sealed record TableSpec(string Name, bool Repeats, string Meaning, KeySpec[] Keys, bool Required = false)
{
    public string Header =>
        Name.Length == 0 ? "(top)"
        : Repeats ? $"[[{Name}]]"
        : $"[{Name}]";
}

/// <summary>Every table and key that a definition file may hold.</summary>
internal static class Schema
{
    private static readonly string[] Fuels = ["Jet A-1", "HEFA", "hydrogen"];

    public static readonly string[] LimitQuantities =
    [
        "T4",
        "T41",
        "T45",
        "EGT",
        "T5",
        "T3",
        "P3",
        "N1",
        "N2",
        "N3",
        "EPR",
    ];

    public static readonly TableSpec[] Tables =
    [
        new(
            "",
            false,
            "At the head of the file.",
            [
                new(
                    "name",
                    Dimension.Text,
                    "Short name, used on the command line and in outputs.",
                    Required: true,
                    Example: "\"velda-27\""
                ),
                new(
                    "description",
                    Dimension.Text,
                    "One line on what the engine is.",
                    Example: "\"Invented twin-spool turbofan\""
                ),
            ],
            true
        ),
        new(
            "gas",
            false,
            "The working fluid and the fuel.",
            [
                new(
                    "model",
                    Dimension.Text,
                    "Thermally perfect mixture with NASA Glenn coefficients, or constant specific heats as in textbooks.",
                    Choices: ["thermally perfect", "constant"],
                    Default: "thermally perfect"
                ),
                new(
                    "fuel",
                    Dimension.Text,
                    "A fuel known by name; a [fuel] table describes any other.",
                    Choices: Fuels,
                    Default: "Jet A-1"
                ),
                new("air_cp", Dimension.SpecificHeat, "Constant gas: specific heat of air.", 0, LeastAllowed: false),
                new(
                    "air_gamma",
                    Dimension.Number,
                    "Constant gas: ratio of specific heats of air.",
                    1,
                    2,
                    LeastAllowed: false,
                    Example: "1.4"
                ),
                new(
                    "burnt_cp",
                    Dimension.SpecificHeat,
                    "Constant gas: specific heat of burnt gas.",
                    0,
                    LeastAllowed: false,
                    Example: "\"1148 J/(kg K)\""
                ),
                new(
                    "burnt_gamma",
                    Dimension.Number,
                    "Constant gas: ratio of specific heats of burnt gas.",
                    1,
                    2,
                    LeastAllowed: false,
                    Example: "1.333"
                ),
                new(
                    "fuel_air_ratio",
                    Dimension.Text,
                    "Constant gas: read off the chart of the real gas, or from a heat balance with the constant specific heats, enthalpies counted from 0 K.",
                    Choices: ["chart", "heat balance"],
                    Default: "chart"
                ),
                new(
                    "count_fuel_mass",
                    Dimension.Switch,
                    "Constant gas: whether the fuel's mass joins the stream.",
                    Default: "false"
                ),
            ]
        ),
        new(
            "fuel",
            false,
            "A fuel of carbon and hydrogen that is not known by name.",
            [
                new("name", Dimension.Text, "As shown.", Required: true, Example: "\"test blend\""),
                new("carbon", Dimension.Number, "Carbon atoms a molecule.", 0, 100, Required: true, Example: "12"),
                new(
                    "hydrogen",
                    Dimension.Number,
                    "Hydrogen atoms a molecule.",
                    0,
                    200,
                    LeastAllowed: false,
                    Required: true,
                    Example: "23"
                ),
                new(
                    "heating_value",
                    Dimension.SpecificEnergy,
                    "Lower heating value at 25 °C.",
                    1e6,
                    2e8,
                    Required: true
                ),
            ]
        ),
        new(
            "design",
            false,
            "The point at which the engine is sized. Either altitude or pressure; either isa_offset or temperature; at most one of relative_humidity and water_air_ratio; either mass_flow or net_thrust; either T4 or T41.",
            [
                new("altitude", Dimension.Length, "Pressure altitude.", -2000, 32000),
                new("pressure", Dimension.Pressure, "Ambient static pressure.", 900, 127000),
                new("mach", Dimension.Number, "Flight Mach number.", 0, 3, Required: true),
                new(
                    "isa_offset",
                    Dimension.TemperatureDifference,
                    "Offset from the standard temperature.",
                    -60,
                    60,
                    Default: "0 K"
                ),
                new("temperature", Dimension.Temperature, "Outside air temperature.", 170, 340, Example: "\"288 K\""),
                new(
                    "relative_humidity",
                    Dimension.Share,
                    "Of the ambient air.",
                    0,
                    1,
                    Default: "0 %",
                    Example: "\"60 %\""
                ),
                new(
                    "water_air_ratio",
                    Dimension.Share,
                    "Water vapour per dry air, kg/kg; give this or relative_humidity.",
                    0,
                    0.1,
                    Default: "0",
                    Example: "0.01"
                ),
                new("mass_flow", Dimension.MassFlow, "Air taken in by the engine.", 0, LeastAllowed: false),
                new(
                    "net_thrust",
                    Dimension.Force,
                    "Net thrust that sets the size.",
                    0,
                    LeastAllowed: false,
                    Example: "\"28 kN\""
                ),
                new(
                    "bypass_ratio",
                    Dimension.Number,
                    "Bypass flow over core flow; above zero only with a fan.",
                    0,
                    30,
                    Default: "0",
                    Example: "5.8"
                ),
                new("T4", Dimension.Temperature, "Combustor exit total temperature.", 600, 2500),
                new(
                    "T41",
                    Dimension.Temperature,
                    "Total temperature at the first turbine's rotor, vane cooling mixed in.",
                    600,
                    2500,
                    Example: "\"1500 K\""
                ),
            ],
            true
        ),
        new(
            "inlet",
            false,
            "Air inlet. At most one of the two keys.",
            [
                new(
                    "pressure_recovery",
                    Dimension.Share,
                    "Total pressure behind over ahead, below Mach 1; beyond, the standard shock recovery multiplies it.",
                    0.5,
                    1,
                    Default: "1",
                    Example: "0.995"
                ),
                new(
                    "ram_efficiency",
                    Dimension.Share,
                    "Share of the ram energy that turns into pressure.",
                    0,
                    1,
                    LeastAllowed: false,
                    Example: "0.93"
                ),
            ]
        ),
        new(
            "fan",
            false,
            "The compressor that bypass and core stream share. Absent in a turbojet.",
            [
                new("spool", Dimension.Text, "Spool that turns it.", Required: true, Example: "\"low\""),
                new(
                    "pressure_ratio",
                    Dimension.Number,
                    "Of the bypass stream, P13/P2.",
                    1,
                    5,
                    LeastAllowed: false,
                    Required: true,
                    Example: "1.66"
                ),
                new(
                    "isentropic_efficiency",
                    Dimension.Share,
                    "Of the bypass stream. Give this or the polytropic one.",
                    0,
                    1,
                    LeastAllowed: false,
                    Example: "0.90"
                ),
                new(
                    "polytropic_efficiency",
                    Dimension.Share,
                    "Of the bypass stream.",
                    0,
                    1,
                    LeastAllowed: false,
                    Example: "0.905"
                ),
                new(
                    "hub_pressure_ratio",
                    Dimension.Number,
                    "Of the core stream, P21/P2; 1 for a fan behind the core.",
                    1,
                    5,
                    Default: "pressure_ratio",
                    Example: "1.50"
                ),
                new(
                    "hub_isentropic_efficiency",
                    Dimension.Share,
                    "Of the core stream.",
                    0,
                    1,
                    LeastAllowed: false,
                    Default: "as the bypass stream",
                    Example: "0.90"
                ),
                new(
                    "hub_polytropic_efficiency",
                    Dimension.Share,
                    "Of the core stream.",
                    0,
                    1,
                    LeastAllowed: false,
                    Default: "as the bypass stream",
                    Example: "0.91"
                ),
                ReynoldsExponent,
                new(
                    "gear_ratio",
                    Dimension.Number,
                    "Fan speed over the speed of its spool, below 1 behind a reduction gear.",
                    0,
                    1,
                    LeastAllowed: false,
                    Default: "1",
                    Example: "0.4"
                ),
                new(
                    "gear_efficiency",
                    Dimension.Share,
                    "Power that reaches the fan over what the gear takes from the spool.",
                    0.9,
                    1,
                    Default: "1",
                    Example: "0.993"
                ),
            ]
        ),
        new(
            "compressor",
            true,
            "A compressor of the core stream, front to back.",
            [
                new("name", Dimension.Text, "Its name; [[air]] refers to it.", Required: true, Example: "\"hpc\""),
                new("spool", Dimension.Text, "Spool that turns it.", Required: true, Example: "\"high\""),
                new(
                    "pressure_ratio",
                    Dimension.Number,
                    "At the design point; follows from the stages where [[compressor.stage]] gives them, and so does the efficiency.",
                    1,
                    60,
                    LeastAllowed: false,
                    Example: "12.0"
                ),
                new(
                    "map",
                    Dimension.Text,
                    "Table of its map, a file of comma-separated values beside the definition: speed,beta,flow,pressure_ratio,efficiency; scaled to the design point, which goes where the efficiency at design speed is highest. The general shape without it.",
                    Example: "\"hpc-map.csv\""
                ),
                new(
                    "isentropic_efficiency",
                    Dimension.Share,
                    "At the design point. Give this or the polytropic one.",
                    0,
                    1,
                    LeastAllowed: false,
                    Example: "0.86"
                ),
                new(
                    "polytropic_efficiency",
                    Dimension.Share,
                    "At the design point.",
                    0,
                    1,
                    LeastAllowed: false,
                    Example: "0.905"
                ),
                ReynoldsExponent,
                InletDuctLoss,
            ],
            true
        ),
        new(
            "compressor.stage",
            true,
            "A stage of the compressor above it, front to back. The stages are stacked into its map.",
            [
                new(
                    "flow_coefficient",
                    Dimension.Number,
                    "Axial over blade speed at the mean line.",
                    0.1,
                    1.5,
                    Required: true,
                    Example: "0.51"
                ),
                new(
                    "work_coefficient",
                    Dimension.Number,
                    "Work over blade speed squared.",
                    0.02,
                    1,
                    Required: true,
                    Example: "0.36"
                ),
                new(
                    "blade_speed",
                    Dimension.Speed,
                    "Mean blade speed at design speed for air of 288.15 K.",
                    50,
                    700,
                    Required: true,
                    Example: "\"375 m/s\""
                ),
                new(
                    "polytropic_efficiency",
                    Dimension.Share,
                    "At the design point. Give this or the pressure ratio.",
                    0.3,
                    1,
                    Example: "0.915"
                ),
                new(
                    "pressure_ratio",
                    Dimension.Number,
                    "Of the stage; its efficiency then follows from the work.",
                    1,
                    4,
                    LeastAllowed: false,
                    Example: "1.45"
                ),
                new(
                    "peak_pressure",
                    Dimension.Number,
                    "Pressure coefficient at the top of the characteristic, over design.",
                    1,
                    2,
                    LeastAllowed: false,
                    Default: "1.12",
                    Example: "1.12"
                ),
                new(
                    "peak_flow",
                    Dimension.Number,
                    "Flow coefficient there, over design.",
                    0.3,
                    0.99,
                    Default: "0.8",
                    Example: "0.8"
                ),
                new(
                    "shape",
                    Dimension.Number,
                    "How far the parabola's vertex lies beyond the top, over the way there from design; positive is flatter about design.",
                    -0.9,
                    0.9,
                    Default: "0",
                    Example: "0.2"
                ),
                new(
                    "stator_reset",
                    Dimension.Number,
                    "Variable stator: relative reduction of the design flow coefficient per unit of corrected speed below 1; 0 for a fixed one.",
                    0,
                    3,
                    Default: "0",
                    Example: "1.2"
                ),
                new(
                    "bleed",
                    Dimension.Share,
                    "Share of the compressor's inlet flow that leaves behind this stage when the map is made.",
                    0,
                    1,
                    MostAllowed: false,
                    Default: "0",
                    Example: "\"1.3 %\""
                ),
            ]
        ),
        new(
            "combustor",
            false,
            "The combustor.",
            [
                new(
                    "pressure_loss",
                    Dimension.Share,
                    "Total-pressure loss at the design point.",
                    0,
                    0.5,
                    MostAllowed: false,
                    Default: "0",
                    Example: "\"4.5 %\""
                ),
                new(
                    "efficiency",
                    Dimension.Share,
                    "Heat released over heat in the fuel.",
                    0.5,
                    1,
                    Default: "1",
                    Example: "0.999"
                ),
            ]
        ),
        new(
            "turbine",
            true,
            "A turbine, in the order in which the gas meets them.",
            [
                new("name", Dimension.Text, "Its name; [[air]] refers to it.", Required: true, Example: "\"hpt\""),
                new("spool", Dimension.Text, "Spool that it turns.", Required: true, Example: "\"high\""),
                new(
                    "isentropic_efficiency",
                    Dimension.Share,
                    "At the design point. Give this or the polytropic one.",
                    0,
                    1,
                    LeastAllowed: false,
                    Example: "0.89"
                ),
                new(
                    "polytropic_efficiency",
                    Dimension.Share,
                    "At the design point.",
                    0,
                    1,
                    LeastAllowed: false,
                    Example: "0.88"
                ),
                ReynoldsExponent,
                InletDuctLoss,
                new(
                    "stages",
                    Dimension.Whole,
                    "Number of stages; sets the expansion ratio at which it chokes.",
                    1,
                    12,
                    Default: "1",
                    Example: "4"
                ),
                new(
                    "choking_ratio",
                    Dimension.Number,
                    "Expansion ratio beyond which the capacity no longer grows.",
                    1.1,
                    50,
                    Default: "1.9 stages^0.55",
                    Example: "2.2"
                ),
                new(
                    "best_velocity_ratio",
                    Dimension.Number,
                    "Blade speed over spouting speed of best efficiency, over that of the design point.",
                    0.5,
                    2,
                    Default: "1.08",
                    Example: "1.08"
                ),
            ],
            true
        ),
        new(
            "spool",
            true,
            "A shaft, the low-pressure one first.",
            [
                new(
                    "name",
                    Dimension.Text,
                    "Its name; fan, compressors and turbines refer to it.",
                    Required: true,
                    Example: "\"low\""
                ),
                new(
                    "speed",
                    Dimension.RotationalSpeed,
                    "At the design point; speeds are shown in per cent alone without it.",
                    0,
                    LeastAllowed: false
                ),
                new(
                    "mechanical_efficiency",
                    Dimension.Share,
                    "Power that reaches compressors and offtake over the turbine's.",
                    0.5,
                    1,
                    Default: "1",
                    Example: "0.995"
                ),
                new("power_offtake", Dimension.Power, "For accessories and aircraft.", 0, Default: "0 kW"),
            ],
            true
        ),
        new(
            "air",
            true,
            "Air taken from a compressor: cooling, customer bleed, handling bleed, leakage.",
            [
                new(
                    "name",
                    Dimension.Text,
                    "Its name in the ledger and on the command line.",
                    Required: true,
                    Example: "\"customer-bleed\""
                ),
                new(
                    "from",
                    Dimension.Text,
                    "Compressor that it comes from, or \"fan\": the bypass stream behind the fan.",
                    Required: true,
                    Example: "\"hpc\""
                ),
                new(
                    "work_fraction",
                    Dimension.Share,
                    "Share of the compressor's enthalpy rise done on it before it leaves.",
                    0,
                    1,
                    Default: "1",
                    Example: "0.6"
                ),
                new(
                    "stage",
                    Dimension.Whole,
                    "Stage behind which it leaves, in place of work_fraction, where [[compressor.stage]] tables give the stages.",
                    1,
                    40,
                    Example: "5"
                ),
                new(
                    "to",
                    Dimension.Text,
                    "\"overboard\", \"bypass duct\", \"<turbine> vane\" (mixes ahead of the rotor and does work) or \"<turbine> rotor\" (mixes behind it).",
                    Required: true,
                    Example: "\"hpt vane\""
                ),
                new(
                    "fraction",
                    Dimension.Share,
                    "Share of the compressor's inlet flow; from the fan, of the bypass flow.",
                    0,
                    1,
                    MostAllowed: false,
                    Default: "0",
                    Example: "\"7 %\""
                ),
                new(
                    "flow",
                    Dimension.MassFlow,
                    "Flow on top of the share.",
                    0,
                    Default: "0 kg/s",
                    Example: "\"0.5 kg/s\""
                ),
                new(
                    "open_below",
                    Dimension.Number,
                    "Valve: the share is taken in full below this relative corrected speed of its compressor ...",
                    0,
                    2,
                    Example: "0.70"
                ),
                new(
                    "shut_above",
                    Dimension.Number,
                    "... and not at all above this one.",
                    0,
                    2,
                    LeastAllowed: false,
                    Example: "0.92"
                ),
                new(
                    "normally",
                    Dimension.Text,
                    "Whether the port takes its air unless told otherwise; anti-ice and precooler air is normally shut.",
                    Choices: ["open", "shut"],
                    Default: "open"
                ),
            ]
        ),
        Loss("bypass_duct", "Bypass duct."),
        Loss("core_duct", "Duct from the last turbine to the core nozzle."),
        new(
            "mixer",
            false,
            "A forced mixer: core and bypass stream meet at equal static pressure, mix, and leave by the core nozzle.",
            [
                new(
                    "core_mach",
                    Dimension.Number,
                    "Mach number of the core stream where they meet, at the design point.",
                    0.1,
                    0.9,
                    Required: true,
                    Example: "0.45"
                ),
                new(
                    "effectiveness",
                    Dimension.Share,
                    "Share of the ideal gain of thrust by mixing that is had.",
                    0,
                    1,
                    Default: "1",
                    Example: "0.8"
                ),
                new(
                    "pressure_loss",
                    Dimension.Share,
                    "Total-pressure loss of mixer and tailpipe at the design point.",
                    0,
                    0.5,
                    MostAllowed: false,
                    Default: "0",
                    Example: "\"0.6 %\""
                ),
            ]
        ),
        Nozzle("core_nozzle", "Nozzle of the core stream, or of the mixed one."),
        Coefficients("core_nozzle"),
        Nozzle("bypass_nozzle", "Nozzle of the bypass stream."),
        Coefficients("bypass_nozzle"),
        new(
            "nacelle",
            false,
            "What the nacelle takes: installed thrust is net thrust less this.",
            [
                new(
                    "drag_area",
                    Dimension.Area,
                    "External drag over the dynamic pressure.",
                    0,
                    50,
                    Default: "0 m2",
                    Example: "\"0.4 m2\""
                ),
                new(
                    "scrubbing_loss",
                    Dimension.Share,
                    "Share of the bypass nozzle's gross thrust lost on the cowl and pylon behind it; needs a bypass nozzle.",
                    0,
                    0.2,
                    Default: "0",
                    Example: "\"0.5 %\""
                ),
            ]
        ),
        new(
            "control",
            false,
            "What the thrust lever commands: corrected speed of the first spool.",
            [
                new(
                    "idle_speed",
                    Dimension.Share,
                    "Relative corrected speed at lever 0.",
                    0.1,
                    1,
                    Default: "30 %",
                    Example: "\"30 %\""
                ),
                new(
                    "full_speed",
                    Dimension.Share,
                    "Relative corrected speed at lever 1.",
                    0.5,
                    1.5,
                    Default: "105 %",
                    Example: "\"105 %\""
                ),
                new(
                    "idle_core_speed",
                    Dimension.Share,
                    "Speed of the last spool, over design, at which the control holds the engine at idle, on the ground and in flight; without it there is no idle to ask for.",
                    0.2,
                    1,
                    Example: "\"65 %\""
                ),
            ]
        ),
        new(
            "rating",
            true,
            "A rating. Of thrust, flat_to and a gas-temperature limit any two give the third.",
            [
                new("name", Dimension.Text, "Its name.", Required: true, Example: "\"take-off\""),
                new("thrust", Dimension.Force, "Flat thrust, static at sea level.", 0, LeastAllowed: false),
                new(
                    "flat_to",
                    Dimension.TemperatureDifference,
                    "Offset from the standard temperature up to which the thrust is flat.",
                    -60,
                    60
                ),
            ]
        ),
        new(
            "rating.limit",
            true,
            "A limit of the rating above it.",
            [
                new(
                    "quantity",
                    Dimension.Text,
                    "What is limited; EGT is T45.",
                    Required: true,
                    Choices: LimitQuantities,
                    Example: "\"T41\""
                ),
                new(
                    "value",
                    Dimension.Dependent,
                    "The limit: a temperature, a pressure, a share of design speed, or a number for EPR.",
                    Required: true,
                    Example: "\"1700 K\""
                ),
            ]
        ),
    ];

    private static KeySpec ReynoldsExponent =>
        new(
            "reynolds_exponent",
            Dimension.Number,
            "n in (1 - efficiency) ~ Re^-n against the design point; 0 leaves the effect out, 0.1 to 0.2 is usual.",
            0,
            0.5,
            Default: "0",
            Example: "0.1"
        );

    private static KeySpec InletDuctLoss =>
        new(
            "inlet_duct_loss",
            Dimension.Share,
            "Total-pressure loss of the duct ahead at the design point.",
            0,
            0.5,
            MostAllowed: false,
            Default: "0",
            Example: "\"1 %\""
        );

    public static TableSpec? Find(string table) => Tables.FirstOrDefault(t => t.Name == table);

    private static TableSpec Loss(string name, string meaning) =>
        new(
            name,
            false,
            meaning,
            [
                new(
                    "pressure_loss",
                    Dimension.Share,
                    "Total-pressure loss at the design point.",
                    0,
                    0.5,
                    MostAllowed: false,
                    Default: "0",
                    Example: "\"1.5 %\""
                ),
            ]
        );

    private static TableSpec Nozzle(string name, string meaning) =>
        new(
            name,
            false,
            meaning,
            [
                new(
                    "efficiency",
                    Dimension.Share,
                    "Isentropic efficiency up to the exit plane of a convergent nozzle.",
                    0.5,
                    1,
                    Default: "1",
                    Example: "0.95"
                ),
                new(
                    "exit_area_ratio",
                    Dimension.Number,
                    "Exit over throat area of a convergent-divergent nozzle; 1 is convergent.",
                    1,
                    4,
                    Default: "1",
                    Example: "1.08"
                ),
                new(
                    "velocity_coefficient",
                    Dimension.Share,
                    "Jet momentum over that of the exit speed.",
                    0.5,
                    1,
                    Default: "1",
                    Example: "0.995"
                ),
                new(
                    "discharge_coefficient",
                    Dimension.Share,
                    "Effective over geometric throat area.",
                    0.5,
                    1,
                    Default: "1",
                    Example: "0.98"
                ),
            ]
        );

    private static TableSpec Coefficients(string nozzle) =>
        new(
            nozzle + ".coefficients",
            true,
            "The nozzle's coefficients at one pressure ratio, in rising order, in place of the constants; between them a smooth curve, outside them the last value.",
            [
                new(
                    "pressure_ratio",
                    Dimension.Number,
                    "Total over ambient pressure.",
                    1,
                    50,
                    Required: true,
                    Example: "1.6"
                ),
                new("velocity", Dimension.Share, "Velocity coefficient there.", 0.5, 1, Example: "0.99"),
                new("discharge", Dimension.Share, "Discharge coefficient there.", 0.5, 1, Example: "0.97"),
            ]
        );
}
