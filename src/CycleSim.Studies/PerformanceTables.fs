namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Globalization
open System.Runtime.InteropServices
open System.Threading
open CycleSim.Air
open CycleSim.Engine
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// How far a table is from fresh solutions, for one of its columns.
type TableError = {
    Column: string
    /// What was compared: "mid-points" of the cells, read linearly along each axis, or the same "points at" another altitude.
    Against: string
    /// Largest and root mean square of the difference, over the fresh value for a table of a rating, over the largest value
    /// of the column for a corrected one (whose thrust passes through zero).
    Largest: float
    Rms: float
    /// Where the largest is found, in the words of the axes.
    Where: string
    /// Places compared; those with a value missing are left out.
    Places: int
} with

    override error.ToString() =
        let percent (v: float) =
            (100.0 * v).ToString("F3", CultureInfo.InvariantCulture)

        $"{error.Column} against {error.Against}: largest {percent error.Largest} %% at {error.Where}, rms {percent error.Rms} %%, {error.Places} places"

/// Thrust and fuel flow over two or three axes, for aircraft performance work.
type PerformanceTable = {
    Engine: string
    Title: string
    /// Names of the axes, outermost first, and their values.
    Axes: IReadOnlyList<KeyValuePair<string, float[]>>
    /// A row for each point of the grid, the last axis fastest; a number that does not exist is NaN.
    Columns: IReadOnlyList<TableColumn>
    /// What the numbers rest on, in words.
    Basis: string
    Errors: IReadOnlyList<TableError>
    WithoutSolution: int
} with

    /// The rows; basis and errors in the provenance.
    member table.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        StudyTable.Of(
            table.Title,
            [|
                yield! provenance
                KeyValuePair("basis", table.Basis)
                for k in 0 .. table.Errors.Count - 1 do
                    KeyValuePair($"interpolation_error_{k + 1}", table.Errors[k].ToString())
            |],
            table.Columns
        )

/// Tables of thrust and fuel flow with what they cost in accuracy.
[<AbstractClass; Sealed>]
type PerformanceTables private () =
    static let mostCells = 200_000

    static member private CheckAxis(name: string, values: float[]) =
        if values.Length < 2 then
            raise (SweepException $"a table needs at least two values of {name}.")

        if values |> Array.pairwise |> Array.exists (fun (a, b) -> not (a < b)) then
            raise (SweepException $"the values of {name} must rise.")

    static member private Middles(values: float[]) =
        values |> Array.pairwise |> Array.map (fun (a, b) -> 0.5 * (a + b))

    /// Mean of the corners of each cell: what reading linearly along each axis gives in its middle.
    static member private AtMiddles(values: float[], lengths: int[]) : float[] =
        let axes = lengths.Length
        let stride = Array.init axes (fun k -> Array.fold (*) 1 lengths[k + 1 ..])
        let cells = lengths |> Array.map (fun n -> n - 1)

        Array.init (Array.fold (*) 1 cells) (fun cell ->
            let mutable rest = cell
            let mutable corner = 0

            for k in axes - 1 .. -1 .. 0 do
                corner <- corner + rest % cells[k] * stride[k]
                rest <- rest / cells[k]

            let sum =
                Seq.sum (
                    seq {
                        for way in 0 .. (1 <<< axes) - 1 do
                            let step =
                                Seq.sum (
                                    seq {
                                        for k in 0 .. axes - 1 do
                                            if way &&& (1 <<< k) <> 0 then
                                                stride[k]
                                    }
                                )

                            values[corner + step]
                    }
                )

            sum / float (1 <<< axes))

    static member private Compare
        (column: string, against: string, read: float[], fresh: float[], scale: float -> float, where: int -> string)
        : TableError =
        let differences =
            Array.map2
                (fun r f ->
                    if Double.IsFinite r && Double.IsFinite f then
                        abs (r - f) / scale f
                    else
                        nan)
                read
                fresh

        let known =
            [| 0 .. differences.Length - 1 |]
            |> Array.filter (fun k -> Double.IsFinite differences[k])

        if known.Length = 0 then
            {
                Column = column
                Against = against
                Largest = nan
                Rms = nan
                Where = "-"
                Places = 0
            }
        else
            let worst = known |> Array.maxBy (fun k -> differences[k])

            {
                Column = column
                Against = against
                Largest = differences[worst]
                Rms = known |> Array.averageBy (fun k -> differences[k] * differences[k]) |> sqrt
                Where = where worst
                Places = known.Length
            }

    /// Words for a place of a grid: its coordinates by name.
    static member private Place(axes: (string * float[])[], index: int) : string =
        let mutable rest = index

        [|
            for k in axes.Length - 1 .. -1 .. 0 do
                let name, values = axes[k]
                let value = values[rest % values.Length]
                rest <- rest / values.Length
                let text = value.ToString("G6", CultureInfo.InvariantCulture)
                $"{name} = {text}"
        |]
        |> Array.rev
        |> String.concat ", "

    static member private Numbers(result: SweepResult, name: string) : float[] =
        (result.Columns |> Seq.find (fun c -> c.Name = name)).Numbers

    /// <summary>
    /// Thrust, fuel flow and N1 of a rating over altitude, Mach number and ISA offset, at dry air.
    /// </summary>
    /// <param name="identity">what stands for the definition, for instance the SHA-256 of its text</param>
    /// <param name="altitudes">pressure altitudes, at least two, rising, -2 000 to 32 000 m</param>
    /// <param name="machs">Mach numbers, at least two, rising, 0 to 3</param>
    /// <param name="isaOffsets">offsets from the standard temperature, at least two, rising</param>
    /// <param name="loads">changes bleeds, offtakes or health in the list of inputs; nothing where null</param>
    /// <param name="threads">0: one for each core</param>
    /// <exception cref="T:CycleSim.Studies.SweepException">Axes too short, not rising, out of range; no such rating.</exception>
    /// <exception cref="T:System.OperationCanceledException">Cancelled.</exception>
    static member Rated
        (
            engine: SizedEngine,
            identity: string,
            rating: string,
            altitudes: float<m>[],
            machs: float[],
            isaOffsets: float<K>[],
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null,
            [<Optional; DefaultParameterValue(0)>] threads: int,
            [<Optional>] cancellation: CancellationToken
        ) : PerformanceTable =
        let axes = [|
            SweepInput.Altitude, Array.map float altitudes
            SweepInput.Mach, machs
            SweepInput.IsaOffset, Array.map float isaOffsets
        |]

        for input, values in axes do
            PerformanceTables.CheckAxis(input.Name, values)

        if altitudes.Length * machs.Length * isaOffsets.Length > mostCells then
            raise (SweepException $"a table has at most {mostCells} points; take fewer.")

        let outputs = [|
            "net_thrust_N"
            "fuel_flow_kg_per_s"
            "N1_relative_speed"
            if engine.Spools[0].Speed > 0.0 then
                "N1_rpm"
        |]

        let run axes =
            let levels =
                axes |> Array.map (fun (input, values) -> SweepLevel.Over(input, values))

            let plan =
                SweepPlan.Of(
                    engine,
                    identity,
                    levels,
                    [| KeyValuePair(SweepInput.Ratings [| rating |], 0.0) |],
                    outputs,
                    loads = loads
                )

            Sweep.Run(plan, threads, cancellation = cancellation)

        let result = run axes

        let middles =
            axes
            |> Array.map (fun (input, values) -> input, PerformanceTables.Middles values)

        let fresh = run middles
        let lengths = axes |> Array.map (fun (_, values) -> values.Length)
        let words = middles |> Array.map (fun (input, values) -> input.Name, values)

        let errors = [|
            for name in outputs[..2] do
                PerformanceTables.Compare(
                    name,
                    "mid-points",
                    PerformanceTables.AtMiddles(PerformanceTables.Numbers(result, name), lengths),
                    PerformanceTables.Numbers(fresh, name),
                    abs,
                    fun index -> PerformanceTables.Place(words, index)
                )
        |]

        {
            Engine = engine.Definition.Name
            Title = $"Thrust and fuel flow of {engine.Definition.Name} at rating {rating}"
            Axes = axes |> Array.map (fun (input, values) -> KeyValuePair(input.Name, values))
            Columns = result.Columns |> Seq.filter (fun c -> c.Name <> "rating") |> Seq.toArray
            Basis =
                "net thrust without installation drag, dry air; errors: linear along each axis against fresh solutions, over the fresh value"
            Errors = errors
            WithoutSolution = result.Summary.Points - result.Summary.Solved
        }

    /// <summary>
    /// Corrected net thrust FN/delta and corrected fuel flow Wf/(delta sqrt(theta)) over Mach number and corrected N1 (relative
    /// to design), delta and theta those of the ambient air over 101 325 Pa and 288.15 K. Worked out at one altitude on a
    /// standard day; what a corrected table leaves out (Reynolds number, gas properties, loads that do not scale) shows in the
    /// differences at the same points of other altitudes.
    /// </summary>
    /// <param name="identity">what stands for the definition, for instance the SHA-256 of its text</param>
    /// <param name="machs">Mach numbers, at least two, rising, 0 to 3</param>
    /// <param name="speeds">corrected N1 relative to its design value, at least two, rising</param>
    /// <param name="altitude">pressure altitude of the table</param>
    /// <param name="others">altitudes at which the table is compared with fresh solutions</param>
    /// <param name="loads">changes bleeds, offtakes or health in the list of inputs; nothing where null</param>
    /// <param name="threads">0: one for each core</param>
    /// <exception cref="T:CycleSim.Studies.SweepException">Axes too short, not rising or out of range.</exception>
    /// <exception cref="T:System.OperationCanceledException">Cancelled.</exception>
    static member Corrected
        (
            engine: SizedEngine,
            identity: string,
            machs: float[],
            speeds: float[],
            altitude: float<m>,
            others: float<m>[],
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null,
            [<Optional; DefaultParameterValue(0)>] threads: int,
            [<Optional>] cancellation: CancellationToken
        ) : PerformanceTable =
        PerformanceTables.CheckAxis("mach", machs)
        PerformanceTables.CheckAxis("corrected_N1_relative_speed", speeds)

        if machs.Length * speeds.Length > mostCells then
            raise (SweepException $"a table has at most {mostCells} points; take fewer.")

        let speed = SweepInput.Power Quantity.CorrectedN1

        let run (height: float<m>) machs speeds =
            let plan =
                SweepPlan.Of(
                    engine,
                    identity,
                    [| SweepLevel.Over(SweepInput.Mach, machs); SweepLevel.Over(speed, speeds) |],
                    [| KeyValuePair(SweepInput.Altitude, float height) |],
                    [| "net_thrust_N"; "fuel_flow_kg_per_s" |],
                    loads = loads
                )

            let result = Sweep.Run(plan, threads, cancellation = cancellation)

            let delta =
                StandardAtmosphere.Pressure(float height) / StandardAtmosphere.SeaLevelPressure

            let theta =
                StandardAtmosphere.Temperature(float height)
                / StandardAtmosphere.SeaLevelTemperature

            let corrected name scale =
                PerformanceTables.Numbers(result, name) |> Array.map (fun v -> v / scale)

            result, corrected "net_thrust_N" delta, corrected "fuel_flow_kg_per_s" (delta * sqrt theta)

        let thrustName, fuelName = "corrected_net_thrust_N", "corrected_fuel_flow_kg_per_s"
        let result, thrust, fuel = run altitude machs speeds

        let middleMachs, middleSpeeds =
            PerformanceTables.Middles machs, PerformanceTables.Middles speeds

        let _, freshThrust, freshFuel = run altitude middleMachs middleSpeeds
        let lengths = [| machs.Length; speeds.Length |]

        let largest (values: float[]) =
            values |> Array.fold (fun top v -> if abs v > top then abs v else top) 0.0

        let compare name against read fresh whole machs speeds =
            PerformanceTables.Compare(
                name,
                against,
                read,
                fresh,
                (fun _ -> largest whole),
                fun index -> PerformanceTables.Place([| "mach", machs; "corrected_N1_relative_speed", speeds |], index)
            )

        let middle name (values: float[]) fresh =
            compare
                name
                "mid-points"
                (PerformanceTables.AtMiddles(values, lengths))
                fresh
                values
                middleMachs
                middleSpeeds

        let errors = [|
            middle thrustName thrust freshThrust
            middle fuelName fuel freshFuel
            for other in others do
                let _, otherThrust, otherFuel = run other machs speeds
                let text = (float other).ToString("F0", CultureInfo.InvariantCulture)
                compare thrustName $"points at {text} m" thrust otherThrust thrust machs speeds
                compare fuelName $"points at {text} m" fuel otherFuel fuel machs speeds
        |]

        let text name =
            result.Columns |> Seq.find (fun c -> c.Name = name)

        {
            Engine = engine.Definition.Name
            Title = $"Corrected thrust and fuel flow of {engine.Definition.Name}"
            Axes = [|
                KeyValuePair("mach", machs)
                KeyValuePair("corrected_N1_relative_speed", speeds)
            |]
            Columns = [|
                TableColumn.Of("mach", "", PerformanceTables.Numbers(result, "mach"))
                TableColumn.Of("corrected_N1_relative_speed", "", PerformanceTables.Numbers(result, speed.Name))
                TableColumn.Of(thrustName, "N", thrust)
                TableColumn.Of(fuelName, "kg/s", fuel)
                text "outcome"
                text "reason"
            |]
            Basis =
                let height = (float altitude).ToString("F0", CultureInfo.InvariantCulture)

                $"FN/delta and Wf/(delta sqrt(theta)), ambient over 101325 Pa and 288.15 K; N1 corrected to the fan face, over design; worked out at {height} m, standard day, dry air; errors over the largest value of the column"
            Errors = errors
            WithoutSolution = result.Summary.Points - result.Summary.Solved
        }
