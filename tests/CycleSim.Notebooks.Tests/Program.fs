module CycleSim.Notebooks.Tests.Program

open Expecto
open Expecto.Impl

/// The summary names the project, so that a run of the whole solution shows whose tests ran.
[<EntryPoint>]
let main arguments =
    testFromThisAssembly ()
    |> Option.toList
    |> testList "CycleSim.Notebooks.Tests"
    |> runTestsWithCLIArgs [] arguments
