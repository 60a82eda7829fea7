namespace CycleSim.Studies

open System
open System.Collections.Generic
open CycleSim.Engine
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// In what a load is measured.
type LoadKind =
    /// Air, kg/s.
    | Flow = 0
    /// Air, as a share of the flow into the port's compressor; behind the fan, of the bypass flow.
    | Share = 1
    /// Shaft power, W.
    | Power = 2

/// One thing that a load takes from the engine, on top of what is taken already.
type LoadItem = {
    /// Name of an air port, or of a spool for power.
    Source: string
    Kind: LoadKind
    /// kg/s, share or W, by the kind; above zero.
    Amount: float
} with

    /// Air from a port of the definition.
    static member Air(port: string, flow: float<kg / s>) : LoadItem = {
        Source = port
        Kind = LoadKind.Flow
        Amount = float flow
    }

    /// Air from a port as a share (0 to 1) of the flow into its compressor; a scheduled port multiplies it by its opening.
    static member AirShare(port: string, share: float) : LoadItem = {
        Source = port
        Kind = LoadKind.Share
        Amount = share
    }

    /// Power from a spool.
    static member Shaft(spool: string, power: float<W>) : LoadItem = {
        Source = spool
        Kind = LoadKind.Power
        Amount = float power
    }

/// Something aboard that lives on the engine, by its name: packs, anti-ice, generators.
type NamedLoad = {
    Name: string
    Items: IReadOnlyList<LoadItem>
}

/// A load that this engine cannot carry, or that is none; the message says why and what was expected.
type LoadException(message: string) =
    inherit QuestionException(message)

/// Where loads meet the inputs of an engine.
module internal Loads =
    let private names (all: seq<string>) = String.Join(", ", all)

    let private find kind (name: string) (known: string[]) load =
        match Array.IndexOf(known, name) with
        | -1 ->
            let there = if known.Length = 0 then "none" else names known

            raise (LoadException $"load '{load}': '{name}' is not {kind} of this engine; it has {there}.")
        | index -> index

    let ports (engine: SizedEngine) = engine.Ports |> Array.map _.Port.Name

    let spools (engine: SizedEngine) = engine.Spools |> Array.map _.Name

    /// The input that an item moves, by its place in the layout.
    /// <exception cref="T:CycleSim.Studies.LoadException">No such port or spool, or an amount out of range.</exception>
    let private input (engine: SizedEngine) load (item: LoadItem) =
        if not (item.Amount > 0.0 && Double.IsFinite item.Amount) then
            raise (
                LoadException $"load '{load}': {item.Source} must give more than nothing; {item.Amount} was asked for."
            )

        match item.Kind with
        | LoadKind.Flow -> engine.Layout.PortFlow(find "an air port" item.Source (ports engine) load)
        | LoadKind.Share when item.Amount >= 1.0 ->
            raise (
                LoadException
                    $"load '{load}': {item.Source} cannot give {item.Amount * 100.0} %% of the flow; less than 100 %% is there."
            )
        | LoadKind.Share -> engine.Layout.PortFraction(find "an air port" item.Source (ports engine) load)
        | LoadKind.Power -> engine.Layout.PowerOfftake(find "a spool" item.Source (spools engine) load)
        | other -> raise (LoadException $"load '{load}': there is no kind {other} of load.")

    /// Inputs and by how much a load moves them.
    /// <exception cref="T:CycleSim.Studies.LoadException">See the message.</exception>
    let moves engine (load: NamedLoad) : (int * float)[] =
        if load.Items.Count = 0 then
            raise (
                LoadException $"load '{load.Name}' takes nothing; name a port with its flow or a spool with its power."
            )

        load.Items
        |> Seq.map (fun item -> input engine load.Name item, item.Amount)
        |> Seq.toArray

    let add (moves: (int * float)[]) (inputs: float[]) =
        for index, amount in moves do
            inputs[index] <- inputs[index] + amount

    /// <exception cref="T:CycleSim.Studies.LoadException">Two loads of one name.</exception>
    let checkNames (loads: seq<NamedLoad>) =
        match loads |> Seq.countBy _.Name |> Seq.tryFind (fun (_, n) -> n > 1) with
        | Some(name, _) -> raise (LoadException $"two loads are called '{name}'; give each its own name.")
        | None -> ()
