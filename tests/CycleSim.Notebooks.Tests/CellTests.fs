module CycleSim.Notebooks.Tests.CellTests

open System
open System.Diagnostics
open System.Threading
open Expecto
open Microsoft.DotNet.Interactive
open Microsoft.DotNet.Interactive.Commands
open Microsoft.DotNet.Interactive.CSharp
open Microsoft.DotNet.Interactive.Events
open CycleSim.Notebooks

let private reference (beside: Type) = $"#r \"{beside.Assembly.Location}\"\n"

let private references =
    reference typeof<NotebookDisplay>
    + reference typeof<CycleSim.Reports.EngineModel>
    + reference typeof<CycleSim.Definitions.EngineLibrary>
    + reference typeof<CycleSim.Studies.FlatRatingResult>

let private run (kernel: Kernel) (code: string) =
    kernel.SendAsync(SubmitCode code).GetAwaiter().GetResult()

let private failures (result: KernelCommandResult) =
    result.Events
    |> Seq.choose (function
        | :? CommandFailed as failed -> Some failed.Message
        | _ -> None)
    |> Seq.toList

let private succeeds kernel code =
    let result = run kernel code
    Expect.isEmpty (failures result) code
    result

let private htmlOf (result: KernelCommandResult) =
    result.Events
    |> Seq.choose (function
        | :? DisplayEvent as shown -> Some shown
        | _ -> None)
    |> Seq.collect _.FormattedValues
    |> Seq.filter (fun v -> v.MimeType = "text/html")
    |> Seq.map _.Value
    |> String.concat "\n"

let private withKernel act =
    use kernel = new CSharpKernel()
    succeeds kernel references |> ignore
    act kernel

let private waitFor (name: string) (condition: unit -> bool) =
    Expect.isTrue (SpinWait.SpinUntil(condition, TimeSpan.FromSeconds 20.0)) name

// A cell that goes on until it is ended, and notes how far it has come.
let private longCell =
    """
    var progress = CycleSim.Notebooks.NotebookProgress.Start("waiting");
    for (var i = 0; i < 2000; i++)
    {
        progress.Cancellation.ThrowIfCancellationRequested();
        points.Add(i);
        progress.Report(i / 2000.0);
        await System.Threading.Tasks.Task.Delay(10);
    }
    """

let private endsWhen (interrupt: Kernel -> unit) =
    withKernel (fun kernel ->
        succeeds kernel "CycleSim.Notebooks.NotebookDisplay.Register();" |> ignore

        succeeds kernel "var points = new System.Collections.Generic.List<int>();"
        |> ignore

        let running = kernel.SendAsync(SubmitCode longCell)

        waitFor "the cell runs" (fun () ->
            match kernel.TryGetValue<Collections.Generic.List<int>> "points" with
            | true, points -> not (isNull points) && points.Count > 2
            | _ -> false)

        interrupt kernel
        waitFor "the cell ends" (fun () -> running.IsCompleted)
        Expect.isNonEmpty (failures running.Result) "the cell says that it was ended"

        let after = succeeds kernel "points.Count"
        Expect.stringContains (htmlOf after) "<pre>" "what it had found is there")

[<Tests>]
let tests =
    testSequenced
    <| testList "cells" [
        testCase "the first cell registers and carries the drawing library, once"
        <| fun () ->
            withKernel (fun kernel ->
                let first =
                    htmlOf (succeeds kernel "CycleSim.Notebooks.NotebookDisplay.Register();")

                Expect.isGreaterThan first.Length 1_000_000 "library"
                Expect.isLessThan first.Length 5_000_000 "once"
                Expect.isFalse (first.Contains "src=\"http") "not fetched")

        testCase "a result as the value of a cell is shown as its table"
        <| fun () ->
            withKernel (fun kernel ->
                succeeds kernel "CycleSim.Notebooks.NotebookDisplay.Register();" |> ignore

                let shown =
                    succeeds
                        kernel
                        "new CycleSim.Reports.EngineModel(CycleSim.Definitions.EngineLibrary.Load(\"velda-27\").Engine).DesignPoint()"
                    |> htmlOf

                Expect.stringContains shown "class=\"cyclesim\"" "ours"
                Expect.stringContains shown "Mach 0.800" "condition"
                Expect.stringContains shown " kN " "thrust")

        testCase "progress is redrawn in place"
        <| fun () ->
            withKernel (fun kernel ->
                let result =
                    succeeds
                        kernel
                        """
                        var p = CycleSim.Notebooks.NotebookProgress.Start("sweep");
                        var report = p.Rows(100);
                        report(50);
                        p.Report(1.0);
                        """

                let updates =
                    result.Events
                    |> Seq.choose (function
                        | :? DisplayedValueUpdated as update -> Some update
                        | _ -> None)
                    |> Seq.toArray

                let last = updates[updates.Length - 1].FormattedValues |> Seq.head
                Expect.stringContains last.Value "sweep: 100 %" "the end is shown")

        testCase "a cell ended by the front end's cancel command leaves kernel and points usable"
        <| fun () -> endsWhen (fun kernel -> kernel.SendAsync(Cancel()) |> ignore)

        if not (OperatingSystem.IsWindows()) then
            testCase "so does one ended by Jupyter's interrupt"
            <| fun () ->
                endsWhen (fun _ ->
                    use kill = Process.Start("kill", $"-WINCH {Environment.ProcessId}")
                    kill.WaitForExit())

        testCase "outside a notebook progress does nothing and is never cancelled"
        <| fun () ->
            let progress = NotebookProgress.Start "alone"
            progress.Report 0.5
            Expect.isFalse progress.Cancellation.IsCancellationRequested "not cancelled"
    ]
