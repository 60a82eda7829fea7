module CycleSim.Studies.Tests.ThrottleTests

open System
open Expecto
open FsCheck
open FsCheck.FSharp
open FSharp.Data.UnitSystems.SI.UnitSymbols
open CycleSim.Air
open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Reports
open CycleSim.Studies

let private model = lazy EngineModel((EngineLibrary.Load "velda-27").Engine)

let private conditions =
    gen {
        let! altitude = Gen.choose (3000, 11500)
        let! mach = Gen.choose (40, 80)
        let! isa = Gen.choose (-15, 15)
        return FlightCondition.AtIsaOffset(float altitude, float mach / 100.0, float isa)
    }
    |> Arb.fromGen

let private holds name count property =
    testCase name (fun () -> Check.One(Config.QuickThrowOnFailure.WithMaxTest count, Prop.forAll conditions property))

let private sfc (flight: FlightCondition) thrust =
    model.Value.At(&flight, Quantity.NetThrust, thrust).Sfc

[<Tests>]
// An engine model serves one thread, so the tests that share it take turns.
let tests =
    testSequenced
    <| testList "throttle" [
        holds "the exact derivative over the power setting is the quotient of small differences" 20 (fun flight ->
            let thrust =
                0.6 * model.Value.AtRating(&flight, model.Value.Rating "max-cruise").NetThrust

            model.Value.At(&flight, Quantity.NetThrust, thrust) |> ignore
            let influence = model.Value.InfluenceOfLastPoint()

            let index name =
                Seq.findIndex ((=) name) influence.Outputs

            let step = 1e-4 * thrust

            let quotient =
                (sfc flight (thrust + step) - sfc flight (thrust - step)) / (2.0 * step)

            let exact = influence.BySetting[index "sfc_kg_per_N_s"]
            // Points solved to 1e-10 leave about 1e-6 of the scale SFC over thrust in the quotient.
            let scale = sfc flight thrust / thrust
            Expect.isLessThan (abs (exact - quotient)) (1e-5 * scale) "slope of consumption"
            Expect.floatClose Accuracy.high influence.BySetting[index "net_thrust_N"] 1.0 "thrust moves as it is set")

        holds "nothing in the loop, nor close by the bottom, costs less than the bottom" 15 (fun flight ->
            let loop = Throttle.Loop(model.Value, flight, "max-cruise", 0.25, 9)
            let least = loop.Least.Point

            for row in loop.Rows do
                match row.Point with
                | null -> ()
                | point -> Expect.isGreaterThanOrEqual point.Sfc (least.Sfc * (1.0 - 1e-9)) "a row"

            if loop.Least.Where = "inside" then
                for share in [ 0.99; 0.999; 1.001; 1.01 ] do
                    Expect.isGreaterThan
                        (sfc flight (share * least.NetThrust))
                        (least.Sfc * (1.0 - 1e-9))
                        $"at {share} of the thrust"

                // The slope vanishes: over one per cent of thrust it moves consumption by less than a hundred-millionth.
                Expect.isLessThan (abs loop.Least.Slope * 0.01 * least.NetThrust) (1e-8 * least.Sfc) "slope")

        testCase "a turbofan in cruise has its bucket below full thrust" (fun () ->
            // Common practice, no source: least SFC lies somewhat below the cruise rating, part load costs more.
            let flight = FlightCondition.AtIsaOffset(10668.0, 0.78, 0.0)
            let loop = Throttle.Loop(model.Value, flight, "max-climb")
            Expect.equal loop.Least.Where "inside" "a bottom"
            let share = loop.Least.Point.NetThrust / float loop.RatedThrust
            Expect.isTrue (share > 0.5 && share < 1.0) $"at {share} of max climb")

        testCase "fixed thrust: no other altitude costs less" (fun () ->
            let at altitude =
                sfc (FlightCondition.AtIsaOffset(altitude, 0.78, 0.0)) 20e3

            let best =
                Throttle.AltitudeForThrust(model.Value, 0.78, 0.0<K>, 20e3<N>, 6000.0<m>, 12500.0<m>)

            let altitude = best.Least.Point.Flight.PressureAltitude

            for away in [ -500.0; -20.0; 20.0; 500.0 ] do
                Expect.isGreaterThan (at (altitude + away)) (best.Least.Point.Sfc * (1.0 - 1e-9)) $"{away} m away")

        testCase "below the tropopause the slope over altitude is exact" (fun () ->
            // The thrust is far below what the engine is made for, so the least consumption is looked for at its upper end.
            let at altitude =
                sfc (FlightCondition.AtIsaOffset(altitude, 0.5, 5.0)) 25e3

            let best =
                Throttle.AltitudeForThrust(model.Value, 0.5, 5.0<K>, 25e3<N>, 2000.0<m>, 6000.0<m>)

            Expect.equal best.Least.Where "highest" "end"
            let quotient = (at 6010.0 - at 5990.0) / 20.0
            Expect.floatClose Accuracy.medium (best.Least.Slope / quotient) 1.0 "slope")

        testCase "a share of a rating: no row costs less" (fun () ->
            let best =
                Throttle.AltitudeForShare(model.Value, 0.78, 0.0<K>, "max-cruise", 0.8, 8000.0<m>, 12500.0<m>)

            for row in best.Rows do
                match row.Point with
                | null -> ()
                | point -> Expect.isGreaterThanOrEqual point.Sfc (best.Least.Point.Sfc * (1.0 - 1e-9)) "a row")

        testCase "ranges without meaning are refused" (fun () ->
            let flight = FlightCondition.AtIsaOffset(10668.0, 0.78, 0.0)

            let refused act =
                Expect.throwsT<ArgumentOutOfRangeException> act "refused"

            refused (fun () -> Throttle.Loop(model.Value, flight, "max-climb", 1.2) |> ignore)
            refused (fun () -> Throttle.Loop(model.Value, flight, "max-climb", 0.2, 2) |> ignore)

            refused (fun () ->
                Throttle.AltitudeForThrust(model.Value, 0.78, 0.0<K>, 20e3<N>, 9000.0<m>, 8000.0<m>)
                |> ignore)

            refused (fun () ->
                Throttle.AltitudeForShare(model.Value, 0.78, 0.0<K>, "max-climb", 0.0, 0.0<m>, 8000.0<m>)
                |> ignore))
    ]
