namespace CycleSim.Studies

open System
open System.Collections.Generic
open CycleSim.Engine
open CycleSim.Reports

/// A change of one component against new: its efficiency or its flow (capacity), as a share (-0.02: two per cent less).
type WornPart = {
    /// "hpt efficiency", "fan flow" and so on.
    Name: string
    Change: float
}

/// A question about wear that this engine cannot be asked; the message says why and what was expected.
type WearException(message: string) =
    inherit QuestionException(message)

/// Where wear meets the inputs of an engine.
[<AbstractClass; Sealed>]
type Wear private () =

    static let parts (engine: SizedEngine) = [|
        let layout = engine.Layout

        if engine.HasFan then
            "fan efficiency", layout.CompressorEfficiency 0
            "fan flow", layout.CompressorFlow 0

        for k in 0 .. engine.Compressors.Length - 1 do
            engine.Compressors[k].Name + " efficiency", layout.CompressorEfficiency(k + 1)
            engine.Compressors[k].Name + " flow", layout.CompressorFlow(k + 1)

        for k in 0 .. engine.Turbines.Length - 1 do
            engine.Turbines[k].Definition.Name + " efficiency", layout.TurbineEfficiency k
            engine.Turbines[k].Definition.Name + " flow", layout.TurbineFlow k
    |]

    /// Every part whose wear can be given, in station order.
    static member Parts(engine: SizedEngine) : IReadOnlyList<string> = Array.map fst (parts engine) :> _

    /// The input that is 1 for a new part, by its place in the layout.
    /// <exception cref="T:CycleSim.Studies.WearException">No such part.</exception>
    static member Input(engine: SizedEngine, name: string) : int =
        match parts engine |> Array.tryFind (fun (known, _) -> known = name) with
        | Some(_, input) -> input
        | None ->
            let known = parts engine |> Array.map fst |> String.concat ", "
            raise (WearException $"'{name}' is not a part of {engine.Definition.Name}; it has {known}.")

    /// Sets the changes in a list of inputs.
    /// <exception cref="T:CycleSim.Studies.WearException">No such part, one given twice, or a change beyond 50 %.</exception>
    static member Apply(engine: SizedEngine, worn: IReadOnlyList<WornPart>, inputs: float[]) : unit =
        match worn |> Seq.countBy _.Name |> Seq.tryFind (fun (_, n) -> n > 1) with
        | Some(name, _) -> raise (WearException $"'{name}' is given twice.")
        | None -> ()

        for part in worn do
            if not (abs part.Change < 0.5) then
                raise (
                    WearException
                        $"'{part.Name}': a change of {100.0 * part.Change} %% of new; expected less than half."
                )

            inputs[Wear.Input(engine, part.Name)] <- 1.0 + part.Change
