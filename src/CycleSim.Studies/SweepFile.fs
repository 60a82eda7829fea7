namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Globalization
open System.IO
open System.Security.Cryptography
open System.Text
open System.Threading
open Parquet
open Parquet.Schema

/// Where the blocks of a sweep go, in their order.
type internal SweepSink =
    abstract Write: block: SweepBlock -> unit
    /// Called once, behind the last block.
    abstract Finish: unit -> unit

/// SHA-256 over the blocks in their order: two files with the same rows in the same blocks have the same.
[<Sealed>]
type internal RowsHash() =
    let whole = IncrementalHash.CreateHash HashAlgorithmName.SHA256

    member _.Add(block: SweepBlock) =
        whole.AppendData(SHA256.HashData(block.Encode()))

    member _.Value = Convert.ToHexStringLower(whole.GetCurrentHash())

/// What stands in the metadata of a sweep's file beside provenance and units.
module internal SweepKeys =
    let definition = "sweep"
    let hash = "sweep_sha256"
    let rows = "rows_sha256"
    let partKey = "part"

    let metadata
        (title: string)
        (provenance: IReadOnlyList<KeyValuePair<string, string>>)
        (plan: SweepPlan)
        (part: string)
        : KeyValuePair<string, string>[] = [|
        KeyValuePair("title", title)
        yield! provenance
        KeyValuePair(definition, plan.Definition)
        KeyValuePair(hash, plan.Hash)
        if part <> "" then
            KeyValuePair(partKey, part)
        for struct (name, unit) in plan.NumberColumns do
            if unit <> "" then
                KeyValuePair("unit." + name, unit)
    |]

/// Parquet, one row group a block; a number that does not exist is null.
[<Sealed>]
type internal ParquetSink
    private (writer: ParquetWriter, fields: DataField[], numbers: int, metadata: KeyValuePair<string, string>[]) =
    let hash = RowsHash()
    let present = Array.zeroCreate<float> SweepPlan.BlockSize
    let levels = Array.zeroCreate<int> SweepPlan.BlockSize

    static let field (name: string) (kind: Type) nullable =
        DataField(name, kind, Nullable nullable)

    static member Fields(numbers: string[], texts: string[]) = [|
        for name in numbers do
            field name typeof<float> true
        for name in texts do
            field name typeof<string> false
    |]

    static member Open(stream: Stream, numbers: string[], texts: string[], metadata: KeyValuePair<string, string>[]) =
        let fields = ParquetSink.Fields(numbers, texts)
        let schema = ParquetSchema(fields |> Array.map (fun f -> f :> Field))
        // Numbers that are solved for are all different: no dictionary and no compression makes them less.
        let options =
            ParquetOptions(CompressionMethod = CompressionMethod.None, DictionaryEncodingSampleSize = 64)

        let writer =
            ParquetWriter.CreateAsync(schema, stream, options).GetAwaiter().GetResult()

        new ParquetSink(writer, fields, numbers.Length, metadata)

    member private _.WriteGroup(block: SweepBlock) =
        task {
            use group = writer.CreateRowGroup()

            for column in 0 .. numbers - 1 do
                let values = block.Numbers[column]

                let mutable count = 0

                // Level 1 stands for a number, 0 for none; only the numbers themselves follow.
                for row in 0 .. block.Rows - 1 do
                    if Double.IsNaN values[row] then
                        levels[row] <- 0
                    else
                        levels[row] <- 1
                        present[count] <- values[row]
                        count <- count + 1

                do!
                    group.WriteAllPartsAsync<float>(
                        fields[column],
                        ReadOnlyMemory(present, 0, count),
                        Nullable(ReadOnlyMemory(levels, 0, block.Rows)),
                        Nullable(),
                        CancellationToken.None
                    )

            for column in 0 .. block.Texts.Length - 1 do
                do! group.WriteAsync(fields[numbers + column], block.Texts[column] :> IReadOnlyCollection<string>)
        }

    interface SweepSink with
        member sink.Write block =
            if block.Rows > 0 then
                hash.Add block
                sink.WriteGroup(block).GetAwaiter().GetResult()

        member _.Finish() =
            let all = Dictionary<string, string>()

            for entry in metadata do
                all[entry.Key] <- entry.Value

            all[SweepKeys.rows] <- hash.Value
            writer.CustomMetadata <- all
            writer.DisposeAsync().AsTask().GetAwaiter().GetResult()

/// CSV: the metadata behind '#', names with units, then the rows; a value that does not exist is empty.
[<Sealed>]
type internal CsvSink(stream: Stream, names: string[], metadata: KeyValuePair<string, string>[]) =
    let writer =
        new StreamWriter(stream, UTF8Encoding false, 1 <<< 16, true, NewLine = "\n")

    do
        for entry in metadata do
            if not (entry.Key.StartsWith "unit.") then
                for line in entry.Value.Split '\n' do
                    writer.WriteLine $"# {entry.Key}: {line}"

        names |> Array.map TableFile.Field |> String.concat "," |> writer.WriteLine

    interface SweepSink with
        member _.Write block =
            for row in 0 .. block.Rows - 1 do
                for column in 0 .. block.Numbers.Length - 1 do
                    let value = block.Numbers[column][row]

                    if column > 0 then
                        writer.Write ','

                    if not (Double.IsNaN value) then
                        writer.Write(value.ToString("R", CultureInfo.InvariantCulture))

                for column in block.Texts do
                    writer.Write ','
                    writer.Write(TableFile.Field column[row])

                writer.WriteLine()

        member _.Finish() = writer.Dispose()

/// Rows kept in memory.
[<Sealed>]
type internal TableSink(plan: SweepPlan) =
    let blocks = List<SweepBlock>()

    interface SweepSink with
        member _.Write block = blocks.Add block
        member _.Finish() = ()

    member _.Columns: TableColumn[] =
        let numbers = plan.NumberColumns

        [|
            for k in 0 .. numbers.Length - 1 do
                let struct (name, unit) = numbers[k]
                TableColumn.Of(name, unit, blocks |> Seq.map (fun b -> b.Numbers[k]) |> Array.concat)
            for k in 0 .. plan.TextColumns.Length - 1 do
                TableColumn.OfText(plan.TextColumns[k], blocks |> Seq.map (fun b -> b.Texts[k]) |> Array.concat)
        |]
