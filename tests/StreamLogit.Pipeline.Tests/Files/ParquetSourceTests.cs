using System.Globalization;
using Parquet;
using Parquet.Schema;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class ParquetSourceTests : FileSourceContract
{
    private const int GroupRows = 17;
    private static readonly DateTime Start = new(2026, 3, 1, 8, 15, 30, DateTimeKind.Utc);

    private protected override string LastFile => Folder["quay.parquet"];

    private protected override List<TakenRecord> Arrange(int records)
    {
        WriteFile(records, alteredRow: 0);
        return [.. Enumerable.Range(1, records).Select(i => new TakenRecord(Json(i), i))];
    }

    private protected override void Shorten() => WriteFile(3999, alteredRow: 0);

    private protected override void Alter() => WriteFile(4000, alteredRow: 4000);

    private protected override IRecordSource Open() =>
        RecordingSource.Open(new FileSourceOptions(LastFile, RecordingFormat.Parquet), 1000, TimeProvider.System);

    private static string Json(int i)
    {
        string note = i % 3 == 0 ? "" : $",\"no \\\"te\":\"{Note(i).Replace("\"", "\\\"", StringComparison.Ordinal)}\"";
        string amount = i % 5 == 0 ? "" : string.Create(CultureInfo.InvariantCulture, $",\"amount\":{Amount(i)}");
        string place = i % 7 < 2 ? "" : string.Create(CultureInfo.InvariantCulture, $",\"place.berth\":{i % 7}");
        string time = Start.AddSeconds(i).AddMicroseconds(i % 2).ToString(i % 2 == 0 ? "yyyy-MM-ddTHH:mm:ssZ" : "yyyy-MM-ddTHH:mm:ss.ffffffZ", CultureInfo.InvariantCulture);
        return $"{{\"id\":{i},\"time\":\"{time}\"{note}{amount},\"late\":{(i % 2 == 0 ? "true" : "false")}{place}}}";
    }

    private static string Note(int i) => new string((char)('a' + i % 26), i * 7919 % 301) + "\"";

    private static double Amount(int i) => i / 8.0;

    private void WriteFile(int rows, int alteredRow) => Task.Run(async () =>
    {
        var id = new DataField<long>("id");
        var time = new DateTimeDataField("time", DateTimeFormat.DateAndTimeMicros, isNullable: false);
        var note = new DataField<string>("no \"te");
        var amount = new DataField<double?>("amount");
        var late = new DataField<bool>("late");
        var berth = new DataField<int?>("berth");
        var schema = new ParquetSchema(id, time, note, amount, late, new StructField("place", berth));
        File.Delete(LastFile); // whoever has the old file open keeps it
        using var file = File.Create(LastFile);
        await using var writer = await ParquetWriter.CreateAsync(schema, file);
        for (int first = 1; first <= rows; first += GroupRows)
        {
            int[] numbers = [.. Enumerable.Range(first, Math.Min(GroupRows, rows - first + 1))];
            using var group = writer.CreateRowGroup();
            await group.WriteAsync<long>(id, numbers.Select(i => (long)i).ToArray());
            await group.WriteAsync<DateTime>(time, numbers.Select(i => Start.AddSeconds(i).AddMicroseconds(i % 2)).ToArray());
            await group.WriteAsync(note, numbers.Select(i => i % 3 == 0 ? null : Note(i)).ToArray());
            await group.WriteAsync<double>(amount, numbers.Select(i => i % 5 == 0 ? (double?)null : Amount(i == alteredRow ? i + 1 : i)).ToArray());
            await group.WriteAsync<bool>(late, numbers.Select(i => i % 2 == 0 != (i == alteredRow)).ToArray());
            await group.WriteAsync<int>(berth, numbers.Select(i => i % 7 < 2 ? (int?)null : i % 7).ToArray());
        }
    }).GetAwaiter().GetResult();

    [Fact]
    public async Task Fill_RowTooLong_IsAReject()
    {
        Arrange(300);
        using var source = RecordingSource.Open(new FileSourceOptions(LastFile, RecordingFormat.Parquet), 300, TimeProvider.System);
        var taken = await TakenRecord.TakeAllAsync(source);

        Assert.Equal(300, taken.Count);
        Assert.All(taken, (record, i) => Assert.Equal(Json(i + 1).Length > 300, record.Detail == $"{Json(i + 1).Length} bytes; at most 300 are allowed"));
        Assert.Contains(taken, record => record.Detail is not null);
    }

    [Fact]
    public void Open_NoParquet_Throws()
    {
        Folder.Write("quay.parquet", "id,time\n1,2\n");

        var error = Assert.Throws<InvalidRecordingException>(Open);
        Assert.StartsWith($"The recording {LastFile} cannot be opened as Parquet: ", error.Message, StringComparison.Ordinal);
    }
}
