module CycleSim.Studies.Tests.PerformanceTablesTests

open System
open Expecto
open FSharp.Data.UnitSystems.SI.UnitSymbols
open CycleSim.Air
open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Reports
open CycleSim.Studies

let private engine = lazy Sizing.Size((EngineLibrary.Load "velda-27").Engine)

let private column (table: PerformanceTable) name =
    (table.Columns |> Seq.find (fun c -> c.Name = name)).Numbers

let private errors (table: PerformanceTable) against =
    table.Errors |> Seq.filter (fun e -> e.Against = against) |> Seq.toList

/// The same engine with constant specific heats and nothing that does not scale with the size of the flow.
let private similar =
    lazy
        (let text =
            (EngineLibrary.Text "velda-27")
                .Replace(
                    "model = \"thermally perfect\"",
                    "model = \"constant\"\nair_cp = \"1005 J/(kg K)\"\nair_gamma = 1.4\nburnt_cp = \"1148 J/(kg K)\"\nburnt_gamma = 1.333"
                )

         Sizing.Size((DefinitionFile.Parse(text, "similar")).Engine))

[<Tests>]
let tests =
    testList "performance tables" [
        testCase "a table of a rating holds the rated points" (fun () ->
            let table =
                PerformanceTables.Rated(
                    engine.Value,
                    "velda-27",
                    "max-climb",
                    [| 3000.0<m>; 9000.0<m> |],
                    [| 0.5; 0.7 |],
                    [| 0.0<K>; 15.0<K> |]
                )

            let model = EngineModel engine.Value
            let thrust, fuel = column table "net_thrust_N", column table "fuel_flow_kg_per_s"
            let mutable row = 0

            for altitude in [ 3000.0; 9000.0 ] do
                for mach in [ 0.5; 0.7 ] do
                    for isa in [ 0.0; 15.0 ] do
                        let flight = FlightCondition.AtIsaOffset(altitude, mach, isa)
                        let point = model.AtRating(&flight, model.Rating "max-climb")
                        Expect.floatClose Accuracy.high thrust[row] point.NetThrust "thrust"
                        Expect.floatClose Accuracy.high fuel[row] point.FuelFlow "fuel flow"
                        row <- row + 1)

        testCase "the error stated is that of a mid-point worked out by itself" (fun () ->
            let table =
                PerformanceTables.Rated(
                    engine.Value,
                    "velda-27",
                    "max-climb",
                    [| 3000.0<m>; 6000.0<m> |],
                    [| 0.5; 0.7 |],
                    [| 0.0<K>; 5.0<K> |]
                )

            let model = EngineModel engine.Value
            let flight = FlightCondition.AtIsaOffset(4500.0, 0.6, 2.5)
            let fresh = model.AtRating(&flight, model.Rating "max-climb").NetThrust
            let error = table.Errors |> Seq.find (fun e -> e.Column = "net_thrust_N")
            let expected = abs (Array.average (column table "net_thrust_N") - fresh) / fresh
            Expect.equal error.Places 1 "one cell"
            Expect.floatClose Accuracy.medium error.Largest expected "largest"
            Expect.floatClose Accuracy.medium error.Rms expected "rms"
            Expect.equal error.Where "pressure_altitude_m = 4500, mach = 0.6, isa_offset_K = 2.5" "where")

        testCase "half the step leaves a quarter of the error" (fun () ->
            // Linear interpolation of a smooth function: the error goes with the square of the step.
            let largest count =
                let table =
                    PerformanceTables.Corrected(
                        engine.Value,
                        "velda-27",
                        SweepValues.Count(0.4, 0.6, count),
                        SweepValues.Count(0.8, 0.96, count),
                        6000.0<m>,
                        [||]
                    )

                errors table "mid-points" |> List.map _.Rms

            for coarse, fine in List.zip (largest 3) (largest 5) do
                Expect.isTrue (coarse / fine > 3.2 && coarse / fine < 4.8) $"{coarse} over {fine}")

        testCase
            "with constant specific heats and nothing drawn off, one table of corrected thrust serves every altitude"
            (fun () ->
                // Dimensional analysis; Saravanamuttoo, Rogers and Cohen, Gas Turbine Theory: corrected quantities of one
                // engine depend on Mach number and corrected speed alone where gas properties do not change. The fuel's do: its
                // heat of combustion does not scale with temperature, so only the thrust is alike.
                let none =
                    Action<float[]>(fun inputs ->
                        for spool in 0 .. similar.Value.Spools.Length - 1 do
                            inputs[similar.Value.Layout.PowerOfftake spool] <- 0.0)

                let table =
                    PerformanceTables.Corrected(
                        similar.Value,
                        "similar",
                        [| 0.3; 0.5; 0.8 |],
                        [| 0.85; 0.95; 1.0 |],
                        6000.0<m>,
                        [| 0.0<m>; 12000.0<m> |],
                        none
                    )

                for against in [ "points at 0 m"; "points at 12000 m" ] do
                    for error in
                        errors table against
                        |> List.filter (fun e -> e.Column = "corrected_net_thrust_N") do
                        Expect.equal error.Places 9 "all compared"
                        Expect.isLessThan error.Largest 1e-8 $"{error}")

        testCase "axes without meaning are refused" (fun () ->
            let refused message machs speeds =
                Expect.throwsC
                    (fun () ->
                        PerformanceTables.Corrected(engine.Value, "v", machs, speeds, 0.0<m>, [||])
                        |> ignore)
                    (fun error -> Expect.stringContains error.Message message "message")

            refused "at least two values of mach" [| 0.5 |] [| 0.8; 0.9 |]
            refused "must rise" [| 0.5; 0.4 |] [| 0.8; 0.9 |]
            refused "outside its range" [| 0.5; 4.0 |] [| 0.8; 0.9 |])
    ]
