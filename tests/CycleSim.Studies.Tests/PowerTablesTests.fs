module CycleSim.Studies.Tests.PowerTablesTests

open System
open Expecto
open FsCheck
open FsCheck.FSharp
open FSharp.Data.UnitSystems.SI.UnitSymbols
open CycleSim.Air
open CycleSim.Definitions
open CycleSim.Matching
open CycleSim.Reports
open CycleSim.Studies

let private model = lazy EngineModel((EngineLibrary.Load "velda-27").Engine)

let private number low high =
    Gen.choose (0, 1000000) |> Gen.map (fun n -> low + (high - low) * float n / 1e6)

/// A small table: one altitude, three temperatures, a speed, a bleed.
type Corner = {
    Altitude: float
    Temperature: float
    Speed: float
    Bleed: float
}

let private corners =
    gen {
        let! altitude = number -300.0 3500.0
        let! temperature = number 240.0 320.0
        let! speed = number 0.0 80.0
        let! bleed = number 0.001 0.04

        return {
            Altitude = altitude
            Temperature = temperature
            Speed = speed
            Bleed = bleed
        }
    }
    |> Arb.fromGen

let private holds name property =
    testCase name (fun () -> Check.One(Config.QuickThrowOnFailure.WithMaxTest 40, Prop.forAll corners property))

let private table (corner: Corner) axis loads =
    PowerTables
        .Run(
            model.Value,
            [| "take-off" |],
            [| corner.Altitude * 1.0<m> |],
            axis,
            Calibrated(corner.Speed * 1.0<m / s>),
            coldest = -100.0<K>,
            hottest = 100.0<K>,
            loads = loads
        )
        .Tables[0]

let private cells corner loads =
    let at step = (corner.Temperature + step) * 1.0<K>

    (table corner (Outside [| at -10.0; at 0.0; at 10.0 |]) loads).Cells
    |> Seq.toArray

let private point (cell: PowerCell) =
    match cell.Point with
    | null -> failtest $"no point: {cell.Reason}"
    | point -> point

let private run (corner: Corner) =
    let setAt = corner.Speed * 1.0<m / s>

    TakeOffRun.Run(
        model.Value,
        "take-off",
        corner.Altitude * 1.0<m>,
        corner.Temperature * 1.0<K>,
        setAt,
        setAt + 10.0<m / s>,
        10.0<m / s>
    )

[<Tests>]
let tests =
    testSequenced
    <| testList "power tables" [
        holds "flat cells have one thrust, limited ones less and less, none is beyond a limit" (fun corner ->
            let rating = model.Value.Rating "take-off"
            let cells = cells corner [||]
            let flat = rating.FlatThrust(corner.Altitude, cells[0].Mach)

            cells
            |> Array.forall (fun c ->
                (c.Governing = "flat") = (abs (float c.NetThrust / flat - 1.0) < 1e-8)
                && LimitMargin.Of(point c, rating)
                   |> Seq.forall (fun m -> m.Left > -1e-8 * m.Limit.Value))
            && cells
               |> Array.pairwise
               |> Array.forall (fun (cold, hot) -> hot.NetThrust <= cold.NetThrust * (1.0 + 1e-9)))

        holds "the flat part ends where the flat rating breaks" (fun corner ->
            let cells = cells corner [||]

            let study =
                FlatRating.Run(model.Value, "take-off", corner.Altitude * 1.0<m>, cells[0].Mach, [||])

            cells
            |> Array.forall (fun c -> (c.Governing = "flat") = (c.OutsideTemperature < study.BreakTemperature)))

        holds "rows by offset are rows by outside temperature" (fun corner ->
            let offset =
                corner.Temperature * 1.0<K>
                - StandardAtmosphere.Temperature corner.Altitude * 1.0<K>

            let byOffset = (table corner (IsaOffsets [| offset |]) [||]).Rows[0].[0]

            let byTemperature =
                (table corner (Outside [| corner.Temperature * 1.0<K> |]) [||]).Rows[0].[0]

            abs (byOffset.N1 - byTemperature.N1) < 1e-9)

        holds "bleed leaves the flat thrust as it is and lowers thrust and N1 at a limit" (fun corner ->
            let load = {
                Name = "packs"
                Items = [| LoadItem.AirShare("customer-bleed", corner.Bleed) |]
            }

            cells corner [| load |]
            |> Array.forall (fun c ->
                let correction = c.Corrections[0]

                if c.Governing = "flat" then
                    correction.NetThrust < 1e-8
                else
                    correction.NetThrust < 0.0 && correction.N1 < 0.0))

        holds "a run meets the rating where it is set, and its thrust falls with airspeed" (fun corner ->
            let result = run corner

            let held (row: TakeOffRunRow) =
                match row.Held with
                | null -> failtest $"no point: {row.Reason}"
                | point -> point

            let atSet = result.Rows |> Seq.find (fun r -> r.CalibratedAirspeed = result.SetAt)

            abs ((held atSet).NetThrust / result.Setting.NetThrust - 1.0) < 1e-8
            && result.Rows
               |> Seq.pairwise
               |> Seq.forall (fun (slow, fast) -> (held fast).NetThrust < (held slow).NetThrust)
            && result.Rows
               |> Seq.forall (fun r ->
                   abs ((held r).Spools[0].RelativeSpeed / result.Setting.Spools[0].RelativeSpeed - 1.0) < 1e-8))

        // Dimensional analysis (any textbook of gas turbines): at one pressure the same thrust means the same corrected
        // speed, so N1 goes with the root of the temperature; what gas properties and power offtake leave is below 0.5 %.
        testCase "N1 of the flat part goes with the root of the outside temperature" (fun () ->
            let result =
                PowerTables.Run(
                    model.Value,
                    [| "take-off" |],
                    [| 0.0<m> |],
                    Outside [| 248.15<K>; 293.15<K> |],
                    Mach 0.0
                )

            let cells = result.Tables[0].Cells |> Seq.toArray
            let expected = Math.Sqrt(293.15 / 248.15)
            Expect.isLessThan (abs (cells[1].N1 / cells[0].N1 / expected - 1.0)) 0.005 "ratio of speeds")

        testCase "cells outside the envelope stay empty and say so" (fun () ->
            let result =
                PowerTables.Run(model.Value, [| "take-off" |], [| 0.0<m> |], Outside [| 330.0<K> |], Mach 0.0)

            let cell = result.Tables[0].Rows[0].[0]
            Expect.isTrue (isNull cell.Point) "no point"
            Expect.stringContains cell.Reason "outside ISA -60 to +40 K" "reason"
            Expect.isTrue (Double.IsNaN cell.N1) "no number")

        testCase "rpm where the definition gives a speed" (fun () ->
            let cell =
                PowerTables
                    .Run(model.Value, [| "take-off" |], [| 0.0<m> |], IsaOffsets [| 0.0<K> |], Mach 0.0)
                    .Tables[0].Rows[0].[0]

            // 3800 rpm at design in the definition.
            Expect.floatClose Accuracy.high (float cell.N1Rpm) (3800.0 * cell.N1) "rpm")

        testCase "the table has a row a cell and columns for each load" (fun () ->
            let load = {
                Name = "packs"
                Items = [| LoadItem.AirShare("customer-bleed", 0.01) |]
            }

            let result =
                PowerTables.Run(
                    model.Value,
                    [| "take-off"; "max-continuous" |],
                    [| 0.0<m>; 1000.0<m> |],
                    IsaOffsets [| 0.0<K>; 20.0<K>; 30.0<K> |],
                    Mach 0.0,
                    loads = [| load |]
                )

            let table = result.Table [||]
            Expect.equal table.Rows 12 "2 ratings of 3 rows and 2 columns"
            Expect.equal (table.Column("N1_change (packs)").Count) 12 "corrections"
            Expect.equal result.Tables[0].Corners.Count 4 "corners")

        testCase "questions without meaning are refused" (fun () ->
            Expect.throwsT<ArgumentException>
                (fun () ->
                    PowerTables.Run(model.Value, [| "take-off" |], [||], Outside [| 288.15<K> |], Mach 0.0)
                    |> ignore)
                "no altitude"

            Expect.throwsT<RatingException>
                (fun () ->
                    PowerTables.Run(model.Value, [| "cruise" |], [| 0.0<m> |], Outside [| 288.15<K> |], Mach 0.0)
                    |> ignore)
                "no rating"

            Expect.throwsT<ArgumentException>
                (fun () ->
                    TakeOffRun.Run(model.Value, "take-off", 0.0<m>, 288.15<K>, 50.0<m / s>, 40.0<m / s>, 10.0<m / s>)
                    |> ignore)
                "held to less than set at")

        testCase "a table stops when it is told to" (fun () ->
            use source = new Threading.CancellationTokenSource()
            source.Cancel()

            Expect.throwsT<OperationCanceledException>
                (fun () ->
                    PowerTables.Run(
                        model.Value,
                        [| "take-off" |],
                        [| 0.0<m> |],
                        Outside [| 288.15<K> |],
                        Mach 0.0,
                        cancellation = source.Token
                    )
                    |> ignore)
                "cancelled")
    ]
