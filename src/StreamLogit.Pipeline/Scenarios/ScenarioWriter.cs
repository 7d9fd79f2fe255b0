using System.Buffers;
using System.Globalization;
using System.Text.Json;
using MathNet.Numerics.Random;

namespace StreamLogit.Pipeline.Scenarios;

/// <summary>Writes the events of a scenario and their labels, all in the order of their times, as JSON Lines in constant memory.</summary>
public sealed class ScenarioWriter
{
    private const int FlushBytes = 1 << 16;
    private static readonly JsonWriterOptions WriterOptions = new() { SkipValidation = true };

    private readonly IScenario _scenario;
    private readonly ScenarioOptions _options;
    private readonly string _idPrefix;
    private readonly Xoshiro256StarStar _random;

    // Labels on their way. Their number is bounded by the event rate times the longest delay, whatever the length of the stream.
    private readonly PriorityQueue<PendingLabel, (long Milliseconds, long Event)> _pending = new();

    internal ScenarioWriter(IScenario scenario, ScenarioOptions options, string idPrefix)
    {
        _scenario = scenario;
        _options = options;
        _idPrefix = idPrefix;
        // A source of its own, so that what happens to the labels never shifts the events.
        _random = new Xoshiro256StarStar(unchecked(options.Seed ^ 0x5EED1ABE), threadSafe: false);
    }

    /// <summary>The truth about what was written so far.</summary>
    public ScenarioTruth Truth { get; } = new();

    /// <summary>Writes all records.</summary>
    /// <param name="output">Where to; it stays open.</param>
    /// <param name="progress">Is told the number of records written from time to time.</param>
    /// <param name="cancellation">Stops between records.</param>
    public void Write(Stream output, Action<long>? progress = null, CancellationToken cancellation = default)
    {
        ArgumentNullException.ThrowIfNull(output);
        var buffer = new ArrayBufferWriter<byte>(FlushBytes * 2);
        using var json = new Utf8JsonWriter(buffer, WriterOptions);
        long midway = _options.Records / 2;
        ScenarioEvent next = default;
        bool hasNext = false;
        for (long record = 0; record < _options.Records; record++)
        {
            if (record == midway) _scenario.Change();
            if (!hasNext)
            {
                next = _scenario.Next();
                hasNext = true;
            }
            if (_pending.TryPeek(out _, out var due) && due.Milliseconds <= next.Milliseconds)
                WriteLabel(json, _pending.Dequeue(), due);
            else
            {
                WriteEvent(json, next);
                hasNext = false;
            }
            json.Flush();
            json.Reset();
            buffer.Write("\n"u8);
            if (buffer.WrittenCount < FlushBytes) continue;
            cancellation.ThrowIfCancellationRequested();
            output.Write(buffer.WrittenSpan);
            buffer.ResetWrittenCount();
            progress?.Invoke(record + 1);
        }
        output.Write(buffer.WrittenSpan);
        output.Flush();
        progress?.Invoke(_options.Records);
    }

    private void WriteEvent(Utf8JsonWriter json, ScenarioEvent next)
    {
        long number = ++Truth.Events;
        json.WriteStartObject();
        WriteIdAndTime(json, number, next.Milliseconds);
        _scenario.WriteFields(json);
        if (_options.TruthField is { } field) json.WriteNumber(field, Math.Round(next.Probability, 6));
        json.WriteEndObject();

        // The same draws for every event, so that none depends on how an earlier label fell.
        bool isBad = _random.NextDouble() < next.Probability;
        bool isLabelled = _random.NextDouble() >= _scenario.UnlabelledShare;
        long due = next.Milliseconds + _scenario.LabelDelayMilliseconds();
        if (isLabelled) _pending.Enqueue(new PendingLabel(next.Probability, isBad), (due, number));
    }

    private void WriteLabel(Utf8JsonWriter json, PendingLabel label, (long Milliseconds, long Event) due)
    {
        json.WriteStartObject();
        WriteIdAndTime(json, due.Event, due.Milliseconds);
        json.WritePropertyName("label"u8);
        _scenario.WriteLabel(json, label.IsBad);
        json.WriteEndObject();
        Truth.AddLabel(label.Probability, label.IsBad);
    }

    private void WriteIdAndTime(Utf8JsonWriter json, long number, long milliseconds)
    {
        Span<char> id = stackalloc char[32];
        id.TryWrite(CultureInfo.InvariantCulture, $"{_idPrefix}{number}", out int idLength);
        json.WriteString("id"u8, id[..idLength]);
        Span<char> time = stackalloc char[32];
        DateTime.UnixEpoch.AddMilliseconds(milliseconds)
            .TryFormat(time, out int timeLength, "yyyy-MM-dd'T'HH:mm:ss.fff'Z'", CultureInfo.InvariantCulture);
        json.WriteString("time"u8, time[..timeLength]);
    }

    private readonly record struct PendingLabel(double Probability, bool IsBad);
}
