module CycleSim.Studies.Tests.PenaltiesTests

open System
open System.IO
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

let private number low high =
    Gen.choose (0, 1000000) |> Gen.map (fun n -> low + (high - low) * float n / 1e6)

/// A condition with a rating that is used there, and a load on the customer port and on both spools.
type LoadedCondition = {
    Flight: FlightCondition
    Rating: string
    Bleed: float
    Low: float
    High: float
} with

    member case.Items(scale: float) = [|
        LoadItem.AirShare("customer-bleed", case.Bleed * scale)
        LoadItem.Shaft("low", case.Low * scale * 1.0<W>)
        LoadItem.Shaft("high", case.High * scale * 1.0<W>)
    |]

let private conditions =
    gen {
        let! cruise = Gen.elements [ false; true ]
        let! altitude = if cruise then number 9000.0 12000.0 else number 0.0 3000.0
        let! mach = if cruise then number 0.7 0.82 else number 0.0 0.25
        let! isa = number -10.0 30.0
        let! bleed = number 0.001 0.04
        let! low = number 1e3 1e5
        let! high = number 1e3 1e5

        return {
            Flight = FlightCondition.AtIsaOffset(altitude, mach, isa)
            Rating = if cruise then "max-cruise" else "take-off"
            Bleed = bleed
            Low = low
            High = high
        }
    }
    |> Arb.fromGen

let private holds name property =
    testCase name (fun () -> Check.One(Config.QuickThrowOnFailure.WithMaxTest 30, Prop.forAll conditions property))

let private run (case: LoadedCondition) loads =
    Penalties.Run(model.Value, case.Flight, case.Rating, loads)

let private load name items = { Name = name; Items = items }

let private values (e: PenaltyEffects) = [
    e.NetThrust
    e.FuelFlow
    e.Sfc
    float e.T41 / 1000.0
    float e.T45 / 1000.0
    yield! e.Speeds
    yield! e.SurgeMargins
]

// A port behind the compressor, one half-way and one in front, as the source has them.
let private withEdit name (edit: string -> string) =
    let text = EngineLibrary.Text name

    let port (name, work) =
        $"[[air]]\nname = \"test-{name}\"\nfrom = \"hpc\"\nwork_fraction = {work}\nto = \"overboard\"\nfraction = \"0 %%\"\n\n"

    let ports =
        [ "front", "0.0"; "middle", "0.5"; "end", "1.0" ]
        |> List.map port
        |> String.concat ""

    let path = Path.Combine(Path.GetTempPath(), Path.GetRandomFileName() + ".toml")

    try
        File.WriteAllText(path, (edit text).Replace("[bypass_duct]", ports + "[bypass_duct]"))
        (EngineLibrary.Load path).Engine
    finally
        File.Delete path

let private withPorts name = EngineModel(withEdit name id)

/// Bartel and Young 2008, Simplified Thrust and Fuel Consumption Models for Modern Two-Shaft Turbofan Engines, J. Aircraft
/// 45(4), Fig. 9: static take-off thrust over that without bleed, A = c1 + c2 w + c3 w2, against the share of core air taken
/// and the share w of the high-pressure compressor's work done on it.
let private publishedRatio percent w =
    let c1, c2, c3 =
        match percent with
        | 2 -> 0.966328, -0.035753, 0.0158028
        | 4 -> 0.929699, -0.0688748, 0.0302575
        | 8 -> 0.859206, -0.139769, 0.0667068
        | other -> failwith $"the source gives no {other} %%"

    c1 + c2 * w + c3 * w * w

/// The source holds the combustor exit temperature: T4 is held here at what the take-off rating comes to at its break.
let private takeOffRatio (model: EngineModel) =
    let flight = FlightCondition.AtIsaOffset(0.0, 0.0, 15.0)
    let rated = model.AtRating(&flight, model.Rating "take-off")

    fun port percent ->
        let inputs = model.Inputs(&flight)
        let index = model.Engine.Ports |> Array.findIndex (fun p -> p.Port.Name = port)
        inputs[model.Layout.PortFraction index] <- float percent / 100.0
        model.At(&flight, Quantity.T4, rated.T4, inputs).NetThrust / rated.NetThrust

[<Tests>]
let tests =
    testSequenced
    <| testList "penalties" [
        holds "no load costs nothing" (fun case ->
            let result = run case [||]

            values result.Together.AtThrust.Full
            @ values result.Together.AtThrust.FirstOrder
            @ values result.Together.AtLimit.Full
            @ values result.Together.AtLimit.FirstOrder
            |> List.forall ((=) 0.0)
            && result.Together.Break = 0.0<K>)

        holds "the exact derivative is the limit of the full answer" (fun case ->
            // Curvature leaves a difference that falls with the square of the load: halved, to a quarter.
            let difference scale =
                let result = run case [| load "all" (case.Items scale) |]
                let p = result.Loads[0]

                values p.AtThrust.Difference @ values p.AtLimit.Difference
                |> List.map abs
                |> List.max

            let whole, half = difference 0.02, difference 0.01
            half < 0.3 * whole + 1e-9)

        holds "bleed and power cost fuel at constant thrust, and thrust and break temperature at the limit" (fun case ->
            let result = run case [| load "all" (case.Items 1.0) |]
            let p = result.Loads[0]

            p.AtThrust.Full.Sfc > 0.0
            && p.AtThrust.Full.T41 > 0.0<K>
            && p.AtLimit.Full.NetThrust < 0.0
            && p.Break < 0.0<K>)

        holds "more bleed never raises thrust at constant limit" (fun case ->
            let thrusts =
                [ 0.25; 0.5; 1.0; 1.5 ]
                |> List.map (fun scale ->
                    load $"{scale}" [| LoadItem.AirShare("customer-bleed", case.Bleed * scale) |])

            let result = run case (List.toArray thrusts)

            0.0 :: (result.Loads |> Seq.map _.AtLimit.Full.NetThrust |> Seq.toList)
            |> List.pairwise
            |> List.forall (fun (less, more) -> more < less))

        holds "two loads together are one load of both" (fun case ->
            let items = case.Items 1.0
            let apart = run case [| load "air" [| items[0] |]; load "power" items[1..] |]
            let whole = run case [| load "both" items |]

            List.forall2
                (fun a b -> abs (a - b) < 1e-8)
                (values apart.Together.AtThrust.Full)
                (values whole.Loads[0].AtThrust.Full))

        holds "what is held stays, and a load that is all a port gives ranks as itself" (fun case ->
            let result = run case [| load "packs" [| case.Items(1.0)[0] |] |]
            let p = result.Loads[0]

            let ranked =
                result.Ranking
                |> Seq.find (fun s -> s.Need = "packs" && s.Source = "customer-bleed")

            abs p.AtThrust.Full.NetThrust < 1e-9
            && abs (ranked.Sfc - p.AtThrust.Full.Sfc) < 1e-8)

        testCase "the ranking goes by fuel" (fun () ->
            let torvik = EngineModel((EngineLibrary.Load "torvik-75").Engine)
            let flight = FlightCondition.AtIsaOffset(10668.0, 0.83, 0.0)

            let result =
                Penalties.Run(
                    torvik,
                    flight,
                    "max-cruise",
                    [| load "packs" [| LoadItem.Air("customer-bleed", 2.0<kg / s>) |] |]
                )

            let packs = result.Ranking |> Seq.filter (fun s -> s.Need = "packs") |> Seq.toList
            Expect.equal packs (packs |> List.sortBy _.Sfc) "cheapest first"
            // Air that has had less work done on it is cheaper, and at a lower pressure.
            let from source =
                packs |> List.find (fun s -> s.Source = source)

            let middle, high = from "ipc-bleed", from "customer-bleed"
            Expect.isLessThan middle.Sfc high.Sfc "fuel"
            Expect.isLessThan middle.SupplyPressure high.SupplyPressure "pressure")

        testCase "a source short of pressure ranks last and says so" (fun () ->
            let torvik = EngineModel((EngineLibrary.Load "torvik-75").Engine)
            let flight = FlightCondition.AtIsaOffset(0.0, 0.0, 15.0)
            let items = [| LoadItem.Air("customer-bleed", 2.0<kg / s>) |]

            let packs least =
                Penalties.Run(torvik, flight, "take-off", [| load "packs" items |], leastPressure = least).Ranking
                |> Seq.filter (fun s -> s.Need = "packs")
                |> Seq.toList

            // Fan air is about the cheapest there is, at a fan's pressure.
            Expect.equal (packs 0.0<Pa>).Head.Source "precooler-air" "any pressure"
            let pressed = packs 250e3<Pa>
            Expect.equal pressed.Head.Source "ipc-bleed" "250 kPa"
            Expect.equal (List.last pressed).Source "precooler-air" "last"
            Expect.stringContains (List.last pressed).Reason "250.0 kPa are needed" "reason")

        // Ranges from memory, low confidence: SFC 1 to 2 % per 1 % bleed at constant thrust.
        // Half-way ports lie at the lower end of it: take delivery air for the check.
        testCase "per cent of delivery air against the usual rule" (fun () ->
            let flight = FlightCondition.AtIsaOffset(10668.0, 0.78, 0.0)
            let result = Penalties.Run(withPorts "velda-27", flight, "max-cruise", [||])
            let unit = result.PerUnit |> Seq.find (fun p -> p.Name = "test-end 1 %")

            Expect.isTrue
                (unit.AtThrust.Full.Sfc >= 0.01 && unit.AtThrust.Full.Sfc <= 0.02)
                $"{unit.AtThrust.Full.Sfc}")

        // Shaft power is made by the gas generator at about its thermal efficiency, 40 to 60 % at cruise, from fuel of
        // 43 MJ/kg: both from memory. The rule of 0.5 to 1 % for 100 kW on 120 kN (from memory, low confidence) belongs to
        // more fuel than this engine burns at 35 000 ft: 100 kW come to 1.2 % there.
        testCase "100 kW at cruise are made at the efficiency of a gas generator" (fun () ->
            let flight = FlightCondition.AtIsaOffset(10668.0, 0.78, 0.0)

            let result =
                Penalties.Run(
                    model.Value,
                    flight,
                    "max-cruise",
                    [| load "generators" [| LoadItem.Shaft("high", 1e5<W>) |] |]
                )

            let fuel = result.Loads[0].AtThrust.Full.FuelFlow * result.AtThrust.FuelFlow
            let efficiency = 1e5 / (fuel * 43e6)
            Expect.isTrue (efficiency >= 0.4 && efficiency <= 0.6) $"{efficiency}")

        testCase "loads that mean nothing are refused with what was expected" (fun () ->
            let refused items words =
                Expect.throwsC
                    (fun () ->
                        Penalties.Run(
                            model.Value,
                            FlightCondition.AtIsaOffset(0.0, 0.0, 15.0),
                            "take-off",
                            [| load "packs" items |]
                        )
                        |> ignore)
                    (fun error ->
                        Expect.isTrue (error :? LoadException) $"{error.GetType()}"
                        Expect.stringContains error.Message words "message")

            refused [||] "takes nothing"
            refused [| LoadItem.Air("cabin", 1.0<kg / s>) |] "it has vane-cooling"
            refused [| LoadItem.Shaft("customer-bleed", 1.0<W>) |] "it has low, high"
            refused [| LoadItem.Air("customer-bleed", 0.0<kg / s>) |] "more than nothing"
            refused [| LoadItem.AirShare("customer-bleed", nan) |] "more than nothing"
            refused [| LoadItem.AirShare("customer-bleed", 1.0) |] "less than 100 %")

        // The source's engines are two-shaft turbofans that it does not describe station by station. This one is of the usual
        // kind: fan 1.7, booster 2.5, high-pressure compressor 10, bypass ratio 6.5, 125 kN. Engines about it (booster 2.3 to 2.6,
        // high-pressure compressor 8 to 10) meet the source too, or all but; velda-27, with less booster, is up to 5 points above
        // it in front of the compressor, and lunde-14g, geared, up to 7 below it at the delivery.
        testCase "take-off thrust falls with bleed as published, wherever in the compressor it is taken" (fun () ->
            let usual =
                EngineModel(
                    withEdit "velda-27" (fun text ->
                        text
                            .Replace("pressure_ratio = 1.66", "pressure_ratio = 1.70")
                            .Replace("pressure_ratio = 1.75", "pressure_ratio = 2.5")
                            .Replace("pressure_ratio = 12.0", "pressure_ratio = 10.0")
                            .Replace("bypass_ratio = 5.8", "bypass_ratio = 6.5")
                            .Replace("thrust = \"120 kN\"", "thrust = \"125 kN\"")
                            // Its speed limits are velda-27's own and would lie below this thrust.
                            .Replace("value = \"107 %\"", "value = \"130 %\"")
                            .Replace("value = \"110 %\"", "value = \"130 %\""))
                )

            let ratio = takeOffRatio usual

            for port, w in [ "test-front", 0.0; "test-middle", 0.5; "test-end", 1.0 ] do
                for percent, points in [ 2, 0.015; 4, 0.015; 8, 0.030 ] do
                    let here, there = ratio port percent, publishedRatio percent w
                    Expect.isLessThan (abs (here - there)) points $"{percent} %% at w = {w}: {here:F4}, {there:F4}")

        testCase
            "half-way and at the delivery the twin-spool engines stand on either side of the published thrust"
            (fun () ->
                let direct = takeOffRatio (withPorts "velda-27")
                let geared = takeOffRatio (withPorts "lunde-14g")

                for port, w in [ "test-middle", 0.5; "test-end", 1.0 ] do
                    for percent in [ 2; 4; 8 ] do
                        let published = publishedRatio percent w
                        Expect.isGreaterThan (direct port percent) published $"{percent} %% at w = {w}, velda-27"
                        Expect.isLessThan (geared port percent) published $"{percent} %% at w = {w}, lunde-14g")

        // Why: with more of the same compression done ahead of the port, more work is lost with the air.
        testCase "the more work is done in front of the port, the more its air costs" (fun () ->
            let shifted =
                EngineModel(
                    withEdit "velda-27" (fun text ->
                        text
                            .Replace("pressure_ratio = 1.75", "pressure_ratio = 2.8")
                            .Replace("pressure_ratio = 12.0", "pressure_ratio = 7.5"))
                )

            let little, much = takeOffRatio (withPorts "velda-27"), takeOffRatio shifted
            Expect.isLessThan (much "test-front" 4) (little "test-front" 4 - 0.005) "thrust with 4 % taken in front")
    ]
