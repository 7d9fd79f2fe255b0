using System.Buffers;
using System.Globalization;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Formats;

/// <summary>
/// Writes scores as JSON objects. Probability and log-odds have the fewest digits that give the same bits when they are read again;
/// contributions are rounded to millionths.
/// </summary>
public sealed class ScoreJson
{
    // The names and punctuation of a score, and numbers of at most 26 characters.
    private const int FixedLength = 256;

    private readonly ReasonJson[] _reasons;
    private readonly byte[] _cutoff;
    private readonly int _reasonLength;

    /// <summary>A writer for the scores of a definition.</summary>
    public ScoreJson(EngineDefinition definition)
    {
        _reasons = [.. definition.Features.Select(feature => new ReasonJson(feature))];
        _cutoff = JsonText.Escape(definition.Decision.Cutoff.ToString("R", CultureInfo.InvariantCulture));
        _reasonLength = _reasons.Select(reason => reason.MaximumLength).DefaultIfEmpty().Max();
    }

    /// <summary>Adds a score to a buffer, without a line end.</summary>
    public void Write(RecordBatch records, ScoreBatch scores, int index, ArrayBufferWriter<byte> buffer)
    {
        ref readonly var score = ref scores.Scores[index];
        var id = records.Id(score.Record);
        var reasons = scores.Reasons(index);
        var room = buffer.GetSpan(FixedLength + JsonText.MaximumLength(id.Length) + reasons.Length * _reasonLength);

        int at = 0;
        Text("{\"id\":\""u8, room, ref at);
        at += JsonText.Write(id, room[at..]);
        Text("\",\"time\":\""u8, room, ref at);
        at += TimestampText.Write(records.Records[score.Record].TimeMicroseconds, room[at..]);
        Text("\",\"probability\":"u8, room, ref at);
        Number(score.Probability, room, ref at);
        Text(",\"logOdds\":"u8, room, ref at);
        Number(score.LogOdds, room, ref at);
        Text(score.IsAlert ? ",\"decision\":\"alert\",\"cutoff\":"u8 : ",\"decision\":\"pass\",\"cutoff\":"u8, room, ref at);
        Text(_cutoff, room, ref at);
        Text(",\"version\":"u8, room, ref at);
        score.Version.TryFormat(room[at..], out int digits, provider: CultureInfo.InvariantCulture);
        at += digits;
        Text(",\"reasons\":["u8, room, ref at);
        for (int i = 0; i < reasons.Length; i++)
        {
            if (i > 0) room[at++] = (byte)',';
            at += _reasons[reasons[i].Feature].Write(reasons[i], room[at..]);
        }
        Text("]}"u8, room, ref at);
        buffer.Advance(at);
    }

    private static void Text(ReadOnlySpan<byte> text, Span<byte> room, ref int at)
    {
        text.CopyTo(room[at..]);
        at += text.Length;
    }

    private static void Number(double value, Span<byte> room, ref int at)
    {
        value.TryFormat(room[at..], out int digits, provider: CultureInfo.InvariantCulture);
        at += digits;
    }
}
