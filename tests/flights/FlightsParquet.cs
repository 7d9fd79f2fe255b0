#:package Parquet.Net
#:property RestorePackagesWithLockFile=false
#:property PublishAot=false

// Writes the flights as a Parquet recording: every event with its label and the time at which the label becomes known. Replayed with
// --set record.labelTime=known it gives the score hash of the recording that Flights.cs writes.
using Parquet;
using Parquet.Schema;

if (args is not [var path, var outputPath])
{
    Console.Error.WriteLine("usage: FlightsParquet.cs FILE.parquet OUTPUT.parquet");
    return 2;
}

var id = new DataField<long>("id");
var time = new DateTimeDataField("time", DateTimeFormat.DateAndTimeMicros, isNullable: false);
var origin = new DataField<string>("origin");
var destination = new DataField<string>("destination");
var hour = new DataField<int>("hour");
var weekday = new DataField<int>("weekday");
var logDistance = new DataField<double>("logDistance");
var label = new DataField<int>("label");
var known = new DateTimeDataField("known", DateTimeFormat.DateAndTimeMicros, isNullable: false);

using var input = File.OpenRead(path);
using var output = File.Create(outputPath);
await using var reader = await ParquetReader.CreateAsync(input);
await using var writer = await ParquetWriter.CreateAsync(new ParquetSchema(id, time, origin, destination, hour, weekday, logDistance, label, known), output);
var fields = reader.Schema.DataFields.ToDictionary(f => f.Name);
long first = 1;
for (int group = 0; group < reader.RowGroupCount; group++)
{
    using var rows = reader.OpenRowGroupReader(group);
    int count = (int)rows.RowCount;
    var date = await Read<DateTime>(rows, fields["date"], count);
    var delay = await Read<long>(rows, fields["delay"], count);
    var distance = await Read<long>(rows, fields["distance"], count);
    var origins = new string?[count];
    var destinations = new string?[count];
    await rows.ReadAsync(fields["origin"], origins);
    await rows.ReadAsync(fields["destination"], destinations);
    using var written = writer.CreateRowGroup();
    await written.WriteAsync<long>(id, Enumerable.Range(0, count).Select(i => first + i).ToArray());
    await written.WriteAsync<DateTime>(time, date);
    await written.WriteAsync(origin, origins);
    await written.WriteAsync(destination, destinations);
    await written.WriteAsync<int>(hour, date.Select(d => d.Hour).ToArray());
    await written.WriteAsync<int>(weekday, date.Select(d => (int)d.DayOfWeek).ToArray());
    await written.WriteAsync<double>(logDistance, distance.Select(miles => Math.Log(1 + miles) / 3 - 2).ToArray());
    await written.WriteAsync<int>(label, delay.Select(minutes => minutes >= 15 ? 1 : 0).ToArray());
    await written.WriteAsync<DateTime>(known, date.Select((d, i) => d.AddMinutes(30 + Math.Ceiling(2 * distance[i] / 15.0))).ToArray());
    first += count;
}
return 0;

static async Task<T[]> Read<T>(ParquetRowGroupReader rows, DataField field, int count) where T : struct
{
    var values = new T?[count];
    await rows.ReadAsync(field, values.AsMemory());
    return [.. values.Select(v => v!.Value)];
}
