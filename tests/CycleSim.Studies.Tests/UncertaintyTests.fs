module CycleSim.Studies.Tests.UncertaintyTests

open System
open System.Threading
open Expecto
open FsCheck
open FsCheck.FSharp
open CycleSim.Air
open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Reports
open CycleSim.Studies

let private engine = lazy (Sizing.Size (EngineLibrary.Load "velda-27").Engine)
let private ground = FlightCondition.AtIsaOffset(0.0, 0.0, 10.0)
let private setting = Limit(Quantity.NetThrust, 105e3)

let private input name spread size : UncertainInput = {
    Name = name
    Spread = spread
    Size = size
}

let private run inputs draws seed =
    Uncertainty.Run(engine.Value, ground, setting, List.toArray inputs, draws, seed)

let private output name (result: UncertaintyResult) =
    result.Outputs |> Seq.find (fun o -> o.Name = name)

[<Tests>]
let tests =
    testSequenced
    <| testList "uncertainty" [
        testCase "for small spreads both ways agree within the error of drawing" (fun () ->
            let inputs = [
                input "hpt efficiency" Spread.Normal 0.004
                input "hpc flow" Spread.Uniform 0.006
                input "temperature" Spread.Triangular 2.0
                input "setting" Spread.Normal 0.003
                input "high power" Spread.Normal 5e3
            ]

            let result = run inputs 8000 3UL

            for o in result.Outputs do
                // Four standard errors, and half a per cent of the spread for what is not linear.
                let allowed = 4.0 * o.StandardDeviationError + 0.005 * o.FirstOrder
                Expect.isLessThan (abs (o.StandardDeviation - o.FirstOrder)) allowed o.Name
                let bias = 4.0 * o.MeanError + 0.03 * o.FirstOrder
                Expect.isLessThan (abs (o.Mean - o.Nominal)) bias o.Name)

        testCase "the spread of what is drawn is that of its distribution" (fun () ->
            // Variances of the distributions: size2, size2/3, size2/6 (any table of distributions). The net thrust set is the input
            // itself, so its drawn spread is the distribution's.
            for spread, variance in [ Spread.Normal, 1.0; Spread.Uniform, 1.0 / 3.0; Spread.Triangular, 1.0 / 6.0 ] do
                let result = run [ input "setting" spread 0.01 ] 6000 7UL
                let thrust = output "net_thrust_N" result
                let expected = 0.01 * sqrt variance * 105e3

                Expect.isLessThan
                    (abs (thrust.StandardDeviation - expected))
                    (4.0 * thrust.StandardDeviationError)
                    $"{spread}"

                Expect.floatClose Accuracy.medium thrust.FirstOrder expected $"{spread}, first order"

                if spread <> Spread.Normal then
                    Expect.isLessThan thrust.High (105e3 * 1.01 + 1e-6) "inside its width")

        testCase "the same seed gives the same numbers, another one others" (fun () ->
            let inputs = [ input "fan efficiency" Spread.Normal 0.01 ]
            let a, b, c = run inputs 1500 5UL, run inputs 1500 5UL, run inputs 1500 6UL
            let sfc result = (output "sfc_kg_per_N_s" result).Mean
            Expect.equal (sfc a) (sfc b) "bits"
            Expect.notEqual (sfc a) (sfc c) "others")

        testCase "an input that does not vary adds nothing" (fun () ->
            let property =
                Prop.forAll (Arb.fromGen (Gen.choose (1, 50))) (fun tenths ->
                    let vary = input "lpt efficiency" Spread.Normal (float tenths / 10000.0)
                    let a = run [ vary ] 2 1UL
                    let b = run [ vary; input "hpc efficiency" Spread.Normal 0.0 ] 2 1UL

                    Seq.forall2
                        (fun (x: UncertainOutput) (y: UncertainOutput) -> x.FirstOrder = y.FirstOrder)
                        a.Outputs
                        b.Outputs
                    && b.Outputs
                       |> Seq.forall (fun o ->
                           o.Shares |> Seq.sumBy _.Share |> fun s -> s = 0.0 || abs (s - 1.0) < 1e-12))

            Check.One(Config.QuickThrowOnFailure.WithMaxTest 10, property))

        testCase "draws without a point are counted with their reason" (fun () ->
            // Some of the draws ask for speeds that are off the maps.
            let result =
                Uncertainty.Run(
                    engine.Value,
                    ground,
                    Limit(Quantity.N1, 1.0),
                    [| input "setting" Spread.Uniform 0.6 |],
                    256,
                    1UL
                )

            let without = result.WithoutPoint |> Seq.sumBy _.Value
            Expect.isGreaterThan without 0 "some"
            Expect.isLessThan without 256 "not all"
            Expect.isTrue (result.WithoutPoint |> Seq.forall (fun w -> w.Key <> "")) "reasons"
            // Kinds of obstacles, not one for every draw.
            Expect.isLessThan result.WithoutPoint.Count 12 "kinds")

        testCase "nothing is drawn below nothing: air speed and power taken" (fun () ->
            // Textbook: at a held speed of the fan the thrust falls with air speed by the ram drag; at a held thrust, power taken
            // from a spool costs fuel.
            let still =
                Uncertainty.Run(
                    engine.Value,
                    ground,
                    Limit(Quantity.N1, 0.95),
                    [| input "mach" Spread.Uniform 0.05 |],
                    300
                )

            let thrust = output "net_thrust_N" still
            Expect.isLessThanOrEqual thrust.High (thrust.Nominal * (1.0 + 1e-9)) "no thrust from flying backwards"

            let spool = engine.Value.Spools.Length - 1

            let unloaded =
                Uncertainty.Run(
                    engine.Value,
                    ground,
                    setting,
                    [| input "high power" Spread.Uniform 3e5 |],
                    300,
                    loads = (fun inputs -> inputs[engine.Value.Layout.PowerOfftake spool] <- 0.0)
                )

            let fuel = output "fuel_flow_kg_per_s" unloaded
            Expect.isGreaterThanOrEqual fuel.Low (fuel.Nominal * (1.0 - 1e-9)) "no fuel from power put in")

        testCase "the number of threads changes no bit" (fun () ->
            let on threads =
                Uncertainty.Run(
                    engine.Value,
                    ground,
                    setting,
                    [|
                        input "hpt efficiency" Spread.Normal 0.01
                        input "temperature" Spread.Uniform 5.0
                    |],
                    1500,
                    9UL,
                    threads = threads
                )

            Expect.equal (Seq.toArray (on 1).Outputs) (Seq.toArray (on 4).Outputs) "outputs")

        testCase "stopped on the way, what has been drawn counts" (fun () ->
            use source = new CancellationTokenSource()

            let stop = {
                new IProgress<float> with
                    member _.Report _ = source.Cancel()
            }

            let result =
                Uncertainty.Run(
                    engine.Value,
                    ground,
                    setting,
                    [| input "hpt efficiency" Spread.Normal 0.01 |],
                    100000,
                    progress = stop,
                    cancellation = source.Token,
                    threads = 1
                )

            Expect.equal result.Draws 100000 "asked"
            Expect.isGreaterThanOrEqual result.Finished 2 "some"
            Expect.isLessThan result.Finished 100000 "not all")

        testCase "stopped at once there is nothing to report, and it is said" (fun () ->
            use source = new CancellationTokenSource()
            source.Cancel()

            Expect.throwsC
                (fun () ->
                    Uncertainty.Run(
                        engine.Value,
                        ground,
                        setting,
                        [| input "mach" Spread.Normal 0.01 |],
                        100000,
                        cancellation = source.Token
                    )
                    |> ignore)
                (fun error -> Expect.stringContains error.Message "fewer than two" "message"))

        testCase "questions that make no sense are refused" (fun () ->
            let refuse inputs draws (says: string) =
                Expect.throwsC (fun () -> run inputs draws 1UL |> ignore) (fun error ->
                    Expect.isTrue (error :? UncertaintyException) "kind"
                    Expect.stringContains error.Message says says)

            refuse [] 100 "no input"
            refuse [ input "weather" Spread.Normal 1.0 ] 100 "no input that can be uncertain"
            refuse [ input "mach" Spread.Normal -0.1 ] 100 "expected 0 or more"
            refuse [ input "mach" Spread.Normal 0.1; input "mach" Spread.Normal 0.1 ] 100 "given twice"
            refuse [ input "mach" Spread.Normal 0.1 ] 1 "draws")
    ]
