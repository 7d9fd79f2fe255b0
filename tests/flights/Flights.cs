#:package Parquet.Net
#:property RestorePackagesWithLockFile=false
#:property PublishAot=false

// Reads the flights and writes them as a recording: every event at its departure, every label when it is known,
// 30 + ceil(2 distance / 15) minutes later. All labels due at or before an event's time come before it, in the order in which they are due.
using System.Globalization;
using System.Text;
using Parquet;
using Parquet.Schema;

if (args is not [var path, "plain" or "reference"])
{
    Console.Error.WriteLine("usage: Flights.cs FILE.parquet plain|reference");
    return 2;
}
bool isReference = args[1] == "reference";

using var output = new StreamWriter(Console.OpenStandardOutput(), new UTF8Encoding(false), 1 << 20);
var due = new PriorityQueue<(long Id, int Label, DateTime Time), (DateTime, long)>();
long id = 0;

using var file = File.OpenRead(path);
await using var reader = await ParquetReader.CreateAsync(file);
var fields = reader.Schema.DataFields.ToDictionary(f => f.Name);
for (int group = 0; group < reader.RowGroupCount; group++)
{
    using var rows = reader.OpenRowGroupReader(group);
    int count = (int)rows.RowCount;
    var date = await Read<DateTime>(rows, fields["date"], count);
    var delay = await Read<long>(rows, fields["delay"], count);
    var distance = await Read<long>(rows, fields["distance"], count);
    var origin = new string?[count];
    var destination = new string?[count];
    await rows.ReadAsync(fields["origin"], origin);
    await rows.ReadAsync(fields["destination"], destination);
    for (int i = 0; i < count; i++)
    {
        WriteLabelsDue(date[i]);
        WriteEvent(++id, date[i], origin[i]!, destination[i]!, distance[i]);
        var known = date[i].AddMinutes(30 + Math.Ceiling(2 * distance[i] / 15.0));
        due.Enqueue((id, delay[i] >= 15 ? 1 : 0, known), (known, id));
    }
}
WriteLabelsDue(DateTime.MaxValue);
return 0;

static async Task<T[]> Read<T>(ParquetRowGroupReader rows, DataField field, int count) where T : struct
{
    var values = new T?[count];
    await rows.ReadAsync(field, values.AsMemory());
    return [.. values.Select(v => v!.Value)];
}

void WriteLabelsDue(DateTime time)
{
    while (due.TryPeek(out var label, out _) && label.Time <= time)
    {
        due.Dequeue();
        output.Write(string.Create(CultureInfo.InvariantCulture, $"{{\"id\":\"{label.Id}\",\"label\":{label.Label},\"time\":\"{label.Time:yyyy-MM-ddTHH:mm:ssZ}\"}}\n"));
    }
}

void WriteEvent(long id, DateTime time, string origin, string destination, long distance)
{
    output.Write(string.Create(CultureInfo.InvariantCulture, $"{{\"id\":\"{id}\",\"time\":\"{time:yyyy-MM-ddTHH:mm:ssZ}\","));
    if (isReference)
    {
        double m = (time.Hour * 60 + time.Minute) / 1440.0;
        int weekend = time.DayOfWeek is DayOfWeek.Saturday or DayOfWeek.Sunday ? 1 : 0;
        output.Write(string.Create(CultureInfo.InvariantCulture, $"\"m\":{m},\"mm\":{m * m},\"distance\":{distance / 1000.0},\"fromOrd\":{(origin == "ORD" ? 1 : 0)},\"toOrd\":{(destination == "ORD" ? 1 : 0)},\"weekend\":{weekend}}}\n"));
    }
    else
    {
        output.Write(string.Create(CultureInfo.InvariantCulture, $"\"origin\":\"{origin}\",\"destination\":\"{destination}\",\"hour\":{time.Hour},\"weekday\":{(int)time.DayOfWeek},\"logDistance\":{Math.Log(1 + distance) / 3 - 2}}}\n"));
    }
}
