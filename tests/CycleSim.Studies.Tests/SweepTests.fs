module CycleSim.Studies.Tests.SweepTests

open System
open System.Collections.Generic
open System.IO
open System.Threading
open DuckDB.NET.Data
open Expecto
open FsCheck
open FsCheck.FSharp
open FSharp.Data.UnitSystems.SI.UnitSymbols
open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Studies

let private loaded = lazy EngineLibrary.Load "velda-27"
let private engine = lazy Sizing.Size loaded.Value.Engine
let private provenance = [| KeyValuePair("engine", "velda-27") |]

let private inFolder (act: string -> unit) =
    let folder = Directory.CreateTempSubdirectory("cyclesim-").FullName

    try
        act folder
    finally
        Directory.Delete(folder, true)

let private plan levels held (outputs: string[] | null) corridor =
    SweepPlan.Of(engine.Value, loaded.Value.Hash, levels, held, outputs, corridor)

/// A sweep of a few blocks: how many altitudes, Mach numbers and powers, what sets the power, a fastest airspeed.
type Question = {
    Altitudes: int
    Machs: int
    Powers: int
    Share: bool
    Vmo: float
    Isa: float
}

let private questions =
    gen {
        let! altitudes = Gen.choose (5, 12)
        let! machs = Gen.choose (3, 9)
        let! powers = Gen.choose (15, 30)
        let! share = Gen.elements [ true; false ]
        let! vmo = Gen.elements [ 120.0; 180.0; infinity ]
        let! isa = Gen.choose (-20, 20)

        return {
            Altitudes = altitudes
            Machs = machs
            Powers = powers
            Share = share
            Vmo = vmo
            Isa = float isa
        }
    }
    |> Arb.fromGen

let private planOf question =
    let power =
        if question.Share then
            SweepInput.ShareOf "max-climb"
        else
            SweepInput.Power Quantity.Lever

    plan
        [|
            SweepLevel.Over(SweepInput.Altitude, SweepValues.Count(0.0, 11000.0, question.Altitudes))
            SweepLevel.Over(SweepInput.Mach, SweepValues.Count(0.2, 0.8, question.Machs))
            SweepLevel.Over(power, SweepValues.Count(0.7, 1.0, question.Powers))
        |]
        [| KeyValuePair(SweepInput.IsaOffset, question.Isa) |]
        [| "net_thrust_N"; "fuel_flow_kg_per_s"; "residual" |]
        (Nullable {
            SweepCorridor.Open with
                HighestAirspeed = question.Vmo * 1.0<m / s>
        })

let private holds name count property =
    testCase name (fun () -> Check.One(Config.QuickThrowOnFailure.WithMaxTest count, Prop.forAll questions property))

let private files path = { Parquet = path; Csv = null }

let private write plan path threads =
    Sweep.Write(plan, provenance, files path, threads = threads)

let private bytesOf (path: string) = File.ReadAllBytes path

let private refused (message: string) act =
    Expect.throwsC act (fun error ->
        Expect.isTrue (error :? SweepException) $"a SweepException, not {error.GetType().Name}: {error.Message}"
        Expect.stringContains error.Message message "message")

let private column (result: SweepResult) name =
    result.Columns |> Seq.find (fun c -> c.Name = name)

let private small =
    lazy
        (planOf {
            Altitudes = 6
            Machs = 7
            Powers = 60
            Share = false
            Vmo = 180.0
            Isa = 0.0
        })

// Stops a sweep as a kill would: what is finished stays behind, and then loses its end.
let private stopAfter plan path rows =
    use source = new CancellationTokenSource()

    let stop =
        Action<int64>(fun points ->
            if points >= rows then
                source.Cancel())

    try
        Sweep.Write(plan, provenance, files path, threads = 2, progress = stop, cancellation = source.Token)
        |> ignore
    with :? OperationCanceledException ->
        ()

[<Tests>]
let tests =
    testList "sweeps" [
        holds "one, two and three threads write the same bytes, and every point is solved to 1e-10" 6 (fun question ->
            inFolder (fun folder ->
                let plan = planOf question

                let written =
                    [ 1; 2; 3 ]
                    |> List.map (fun threads ->
                        let path = Path.Combine(folder, $"{threads}.parquet")
                        write plan path threads |> ignore
                        bytesOf path)

                Expect.isTrue (written[0].AsSpan().SequenceEqual written[1]) "two threads"
                Expect.isTrue (written[0].AsSpan().SequenceEqual written[2]) "three threads"
                let result = Sweep.Run plan
                Expect.equal (int64 result.Summary.Points) plan.Rows "rows"
                let residual = (column result "residual").Numbers
                let outcome = (column result "outcome").Texts

                for row in 0 .. residual.Length - 1 do
                    if outcome[row] = "solved" then
                        Expect.isLessThanOrEqual residual[row] 1e-10 "residual"
                    else
                        Expect.isTrue (Double.IsNaN residual[row]) "no number without a solution"
                        Expect.notEqual (column result "reason").Texts[row] "" "a reason"))

        holds "rows stand in the order of the loops, and only those inside the corridor" 6 (fun question ->
            let result = Sweep.Run(planOf question)
            let altitude = (column result "pressure_altitude_m").Numbers
            let mach = (column result "mach").Numbers

            let power =
                (column
                    result
                    (if question.Share then
                         "share_of_max-climb"
                     else
                         "set_lever_position"))
                    .Numbers

            let expected = [|
                for a in SweepValues.Count(0.0, 11000.0, question.Altitudes) do
                    for m in SweepValues.Count(0.2, 0.8, question.Machs) do
                        let airspeed =
                            CycleSim.Air.Airspeed.CalibratedFromMach(m, CycleSim.Air.StandardAtmosphere.Pressure a)

                        if airspeed <= question.Vmo then
                            for p in SweepValues.Count(0.7, 1.0, question.Powers) do
                                a, m, p
            |]

            Expect.equal (Array.zip3 altitude mach power) expected "rows")

        holds "parts joined in any order are the whole, to the byte" 4 (fun question ->
            inFolder (fun folder ->
                let plan = planOf question
                let whole = Path.Combine(folder, "whole.parquet")
                write plan whole 2 |> ignore
                let count = 1 + question.Machs % 4 + 1

                let parts = [|
                    for n in count .. -1 .. 1 do
                        let path = Path.Combine(folder, $"part{n}.parquet")

                        Sweep.Write(
                            plan,
                            provenance,
                            files path,
                            part = Nullable { Number = n; Of = count },
                            threads = 1
                        )
                        |> ignore

                        path
                |]

                let joined = Path.Combine(folder, "joined.parquet")
                let rows = SweepParts.Join(joined, parts, CancellationToken.None)
                Expect.equal rows plan.Rows "rows"
                Expect.isTrue ((bytesOf whole).AsSpan().SequenceEqual(bytesOf joined)) "bytes"))

        testCase "a sweep cut off at any byte goes on to the same bytes" (fun () ->
            inFolder (fun folder ->
                let plan = small.Value
                let whole = Path.Combine(folder, "whole.parquet")
                write plan whole 2 |> ignore
                let path = Path.Combine(folder, "cut.parquet")
                stopAfter plan path 1L
                let unfinished = (files path).Unfinished
                let left = bytesOf unfinished
                let random = Random 1

                for cut in
                    [
                        0
                        1
                        3
                        left.Length - 1
                        left.Length
                        yield! List.init 8 (fun _ -> random.Next left.Length)
                    ] do
                    File.WriteAllBytes(unfinished, Array.truncate cut left)
                    File.Delete path
                    let summary = write plan path 2
                    Expect.equal (int64 summary.Points) plan.Rows $"rows after a cut at {cut}"
                    Expect.isTrue ((bytesOf path).AsSpan().SequenceEqual(bytesOf whole)) $"bytes after a cut at {cut}"
                    Expect.isFalse (File.Exists unfinished) "nothing is left behind"))

        testCase "what a stopped sweep has finished is not worked out again" (fun () ->
            inFolder (fun folder ->
                let path = Path.Combine(folder, "s.parquet")
                stopAfter small.Value path 1L
                Expect.isFalse (File.Exists path) "no half-written result"
                let summary = write small.Value path 2
                Expect.isGreaterThan summary.Resumed 0 "rows taken over"))

        testCase "a damaged block is worked out again" (fun () ->
            inFolder (fun folder ->
                let whole = Path.Combine(folder, "whole.parquet")
                write small.Value whole 2 |> ignore
                let path = Path.Combine(folder, "d.parquet")
                stopAfter small.Value path 1L
                let unfinished = (files path).Unfinished
                let left = bytesOf unfinished
                left[left.Length - 2000] <- left[left.Length - 2000] ^^^ 1uy
                File.WriteAllBytes(unfinished, left)
                write small.Value path 1 |> ignore
                Expect.isTrue ((bytesOf path).AsSpan().SequenceEqual(bytesOf whole)) "bytes"))

        testCase "what another sweep left is refused with what differs" (fun () ->
            inFolder (fun folder ->
                let path = Path.Combine(folder, "o.parquet")
                stopAfter small.Value path 1L

                let other =
                    planOf {
                        Altitudes = 6
                        Machs = 7
                        Powers = 60
                        Share = false
                        Vmo = 180.0
                        Isa = 1.0
                    }

                let kept = bytesOf (files path).Unfinished
                refused "'at isa_offset_K = 0', here 'at isa_offset_K = 1'" (fun () -> write other path 1 |> ignore)
                Expect.equal (bytesOf (files path).Unfinished) kept "untouched"
                File.WriteAllText((files path).Unfinished, "something else")
                refused "is not an unfinished sweep" (fun () -> write other path 1 |> ignore)))

        testCase "parts that are missing, doubled, foreign or damaged are not joined" (fun () ->
            inFolder (fun folder ->
                let part n =
                    let path = Path.Combine(folder, $"p{n}.parquet")

                    Sweep.Write(
                        small.Value,
                        provenance,
                        files path,
                        part = Nullable { Number = n; Of = 2 },
                        threads = 1
                    )
                    |> ignore

                    path

                let one, two = part 1, part 2
                let out = Path.Combine(folder, "out.parquet")

                let join parts () =
                    SweepParts.Join(out, parts, CancellationToken.None) |> ignore

                refused "missing: 2/2" (join [| one |])
                refused "both part 1/2" (join [| one; one; two |])
                let whole = Path.Combine(folder, "whole.parquet")
                write small.Value whole 1 |> ignore
                refused "is not a part" (join [| whole; two |])
                let bytes = bytesOf two
                // In the middle of the first column's numbers.
                bytes[2000] <- bytes[2000] ^^^ 1uy
                File.WriteAllBytes(two, bytes)
                refused "damaged" (join [| one; two |])
                Expect.isFalse (File.Exists out) "nothing written"))

        testCase "DuckDB reads the same numbers, units and question" (fun () ->
            inFolder (fun folder ->
                let path = Path.Combine(folder, "d.parquet")
                write small.Value path 2 |> ignore
                let result = Sweep.Run small.Value
                use connection = new DuckDBConnection("DataSource=:memory:")
                connection.Open()

                let query sql (read: DuckDBDataReader -> 'a) = [|
                    use command = connection.CreateCommand()
                    command.CommandText <- sql
                    use reader = command.ExecuteReader()

                    while reader.Read() do
                        read reader
                |]

                let rows =
                    query
                        $"SELECT pressure_altitude_m, set_lever_position, net_thrust_N, outcome FROM '{path}'"
                        (fun r ->
                            let number k =
                                if r.IsDBNull k then nan else r.GetDouble k

                            struct (number 0, number 1, number 2, r.GetString 3))

                let bitsOf name row =
                    BitConverter.DoubleToInt64Bits (column result name).Numbers[row]

                Expect.equal rows.Length result.Summary.Points "rows"

                for row in 0 .. rows.Length - 1 do
                    let struct (altitude, lever, thrust, outcome) = rows[row]
                    let bits (v: float) = BitConverter.DoubleToInt64Bits v
                    Expect.equal (bits altitude) (bitsOf "pressure_altitude_m" row) "altitude"
                    Expect.equal (bits lever) (bitsOf "set_lever_position" row) "lever"

                    if outcome = "solved" then
                        Expect.equal (bits thrust) (bitsOf "net_thrust_N" row) "thrust"
                    else
                        Expect.isTrue (Double.IsNaN thrust) "null where there is no solution"

                let metadata =
                    query
                        $"SELECT CAST(decode(key) AS VARCHAR), CAST(decode(value) AS VARCHAR) FROM parquet_kv_metadata('{path}')"
                        (fun r -> r.GetString 0, r.GetString 1)
                    |> Map.ofArray

                Expect.equal metadata["unit.net_thrust_N"] "N" "unit"
                Expect.equal metadata["engine"] "velda-27" "provenance"
                Expect.equal metadata["sweep_sha256"] small.Value.Hash "hash of the question"))

        testCase "a point of a sweep is the point of the everyday way in" (fun () ->
            let result =
                Sweep.Run(
                    plan
                        [| SweepLevel.Over(SweepInput.Altitude, [| 0.0; 5000.0; 10000.0 |]) |]
                        [|
                            KeyValuePair(SweepInput.Mach, 0.6)
                            KeyValuePair(SweepInput.Ratings [| "max-climb" |], 0.0)
                            KeyValuePair(SweepInput.Load(engine.Value, "efficiency_factor_hpc"), 0.98)
                        |]
                        [| "net_thrust_N"; "T41_K"; "surge_margin_constant_flow_hpc" |]
                        (Nullable())
                )

            let model = CycleSim.Reports.EngineModel engine.Value

            for row in 0..2 do
                let altitude = (column result "pressure_altitude_m").Numbers[row]
                let flight = CycleSim.Air.FlightCondition.AtIsaOffset(altitude, 0.6, 0.0)
                let inputs = model.Inputs(&flight)
                inputs[Seq.findIndex ((=) "efficiency_factor_hpc") model.Layout.Names] <- 0.98
                let point = model.AtRating(&flight, model.Rating "max-climb", inputs)
                let margin = point.Compressors |> Seq.find (fun c -> c.Name = "hpc")
                // Both are solved to 1e-10; a little more for what hangs on the map.
                Expect.floatClose Accuracy.high (column result "net_thrust_N").Numbers[row] point.NetThrust "thrust"
                Expect.floatClose Accuracy.high (column result "T41_K").Numbers[row] point.T41 "T41"

                Expect.floatClose
                    Accuracy.high
                    (column result "surge_margin_constant_flow_hpc").Numbers[row]
                    margin.SurgeMarginConstantFlow
                    "margin")

        testCase "points without solution stay, with their reason" (fun () ->
            let result =
                Sweep.Run(
                    plan
                        [|
                            SweepLevel.Over(SweepInput.Power Quantity.NetThrust, [| 20e3; 500e3; 30e3 |])
                        |]
                        [|
                            KeyValuePair(SweepInput.Altitude, 10000.0)
                            KeyValuePair(SweepInput.CalibratedAirspeed, 130.0)
                        |]
                        null
                        (Nullable())
                )

            Expect.equal result.Summary.Points 3 "rows"
            Expect.equal result.Summary.Solved 2 "solved"
            Expect.isTrue (Double.IsNaN (column result "net_thrust_N").Numbers[1]) "no number"
            Expect.notEqual (column result "reason").Texts[1] "" "reason")

        testCase "questions without meaning are refused with the reason" (fun () ->
            let altitude = SweepLevel.Over(SweepInput.Altitude, [| 0.0; 12000.0 |])
            let lever = SweepLevel.Over(SweepInput.Power Quantity.Lever, [| 1.0 |])

            let ask levels held (outputs: string[] | null) corridor () =
                plan levels held outputs corridor |> ignore

            let none = Nullable<SweepCorridor>()

            refused
                "each set the power"
                (ask [| altitude; lever |] [| KeyValuePair(SweepInput.Power Quantity.T4, 1500.0) |] null none)

            refused "nothing sets the power" (ask [| altitude |] [||] null none)
            refused "altitude is missing" (ask [| lever |] [||] null none)
            refused "more than once" (ask [| altitude; altitude; lever |] [||] null none)

            refused
                "both give the speed"
                (ask
                    [| altitude; lever |]
                    [|
                        KeyValuePair(SweepInput.Mach, 0.5)
                        KeyValuePair(SweepInput.CalibratedAirspeed, 100.0)
                    |]
                    null
                    none)

            refused "no output 'thrust'" (ask [| altitude; lever |] [||] [| "thrust" |] none)

            refused
                "2 lie above the ceiling"
                (ask
                    [| SweepLevel.Over(SweepInput.Altitude, [| 11000.0; 12000.0 |]); lever |]
                    [||]
                    null
                    (Nullable {
                        SweepCorridor.Open with
                            Ceiling = 9000.0<m>
                    }))

            refused
                "lowest airspeed lies above its highest"
                (ask
                    [| altitude; lever |]
                    [||]
                    null
                    (Nullable {
                        SweepCorridor.Open with
                            HighestAirspeed = 100.0<m / s>
                            LowestAirspeed = 120.0<m / s>
                    }))

            refused
                "has no rating 'climb'"
                (ask [| altitude |] [| KeyValuePair(SweepInput.Ratings [| "climb" |], 0.0) |] null none)

            refused
                "has no spool for N3"
                (ask [| altitude |] [| KeyValuePair(SweepInput.Power Quantity.N3, 1.0) |] null none)

            refused "outside its range" (fun () -> SweepLevel.Over(SweepInput.Mach, [| 4.0 |]) |> ignore)
            refused "must not be zero" (fun () -> SweepValues.Steps(0.0, 1.0, 0.0) |> ignore)
            refused "leads away" (fun () -> SweepValues.Steps(0.0, 1.0, -0.1) |> ignore)

            refused "same number of values" (fun () ->
                SweepLevel.Paired([| SweepInput.Altitude; SweepInput.Mach |], [| [| 0.0; 1.0 |]; [| 0.1 |] |])
                |> ignore))
    ]
