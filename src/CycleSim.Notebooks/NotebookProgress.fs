namespace CycleSim.Notebooks

open System
open System.Diagnostics
open System.Runtime.InteropServices
open System.Threading
open Microsoft.DotNet.Interactive

/// Interrupting, as Jupyter does it. The kernel itself takes no notice of an interrupt request and ends at SIGINT, so the
/// script that starts it (notebooks/kernel) passes the interrupt on as SIGWINCH, which a program without a terminal
/// otherwise never gets and which does no harm before this is loaded.
[<AbstractClass; Sealed>]
type internal Interrupt private () =
    static let mutable source = new CancellationTokenSource()

    static let registration =
        if OperatingSystem.IsWindows() then
            null
        else
            PosixSignalRegistration.Create(
                PosixSignal.SIGWINCH,
                fun _ -> Interlocked.Exchange(&source, new CancellationTokenSource()).Cancel()
            )

    /// Cancelled by the next interrupt.
    static member Token =
        GC.KeepAlive registration
        source.Token

/// <summary>
/// How far a long cell has come, redrawn in place a few times a second, and the token by which interrupting the kernel
/// ends it.
/// </summary>
[<Sealed>]
type NotebookProgress private (what: string, context: KernelInvocationContext | null) =
    static let between = TimeSpan.FromMilliseconds 250.0

    let clock = Stopwatch.StartNew()
    let gate = Lock()
    let mutable next = TimeSpan.Zero

    let cancellation =
        match context with
        | null -> Interrupt.Token
        | context -> CancellationTokenSource.CreateLinkedTokenSource(context.CancellationToken, Interrupt.Token).Token

    let line share =
        $"{what}: {Figures.percent 0 (Math.Clamp(share, 0.0, 1.0))} %% after {Figures.decimals 1 clock.Elapsed.TotalSeconds} s"

    let display =
        match context with
        | null -> null
        | context -> KernelInvocationContextExtensions.Display(context, line 0.0, "text/plain")

    /// Set when the user interrupts the kernel after the start.
    member _.Cancellation: CancellationToken = cancellation

    /// <summary>Begins to show the progress of this cell.</summary>
    /// <param name="what">what is being worked out, in a word or two</param>
    static member Start(what: string) =
        NotebookProgress(what, KernelInvocationContext.Current)

    /// <summary>Shows a share of the work as done. May be called from any thread.</summary>
    /// <param name="share">0 to 1</param>
    member _.Report(share: float) =
        gate.Enter()

        try
            if share >= 1.0 || clock.Elapsed >= next then
                next <- clock.Elapsed + between

                match display with
                | null -> ()
                | display -> display.Update(line share)
        finally
            gate.Exit()

    /// <summary>Takes the number of rows done so far, as a sweep tells it.</summary>
    /// <param name="total">rows of the whole</param>
    member progress.Rows(total: int64) : Action<int64> =
        Action<int64>(fun rows -> progress.Report(float rows / float total))

    interface IProgress<float> with
        member progress.Report share = progress.Report share
