using System.Globalization;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Formats;

/// <summary>
/// Writes the reasons of one feature as JSON objects: its name, for a history also the words with the figure that it had, and its contribution,
/// rounded to millionths.
/// </summary>
internal sealed class ReasonJson
{
    // As many digits as the largest figure has, with those behind the point.
    private const int MaximumNumberLength = 330;

    private readonly byte[] _name;
    private readonly ReasonWords? _words;
    private readonly Dictionary<ReasonPhrase, (byte[] Before, byte[] After)> _phrases = new(ReferenceEqualityComparer.Instance);
    private readonly byte[] _unknown = [];
    private readonly byte[] _missing = [];

    public ReasonJson(FeatureOptions feature)
    {
        _name = JsonText.Escape(feature.Name);
        _words = feature.Words;
        MaximumLength = _name.Length + RoundedNumber.MaximumLength + 64;
        if (_words is null) return;
        foreach (var phrase in _words.Phrases) _phrases[phrase] = (JsonText.Escape(phrase.Before), JsonText.Escape(phrase.After ?? ""));
        _unknown = JsonText.Escape(_words.Unknown);
        _missing = JsonText.Escape(_words.Missing);
        MaximumLength += MaximumNumberLength
            + _phrases.Values.Select(phrase => phrase.Before.Length + phrase.After.Length).Append(_unknown.Length).Append(_missing.Length).Max();
    }

    /// <summary>The most bytes that a reason takes.</summary>
    public int MaximumLength { get; }

    /// <returns>How many bytes were written.</returns>
    public int Write(in Reason reason, Span<byte> room)
    {
        int at = 0;
        Text("{\"feature\":\""u8, room, ref at);
        Text(_name, room, ref at);
        if (_words is not null)
        {
            Text("\",\"words\":\""u8, room, ref at);
            Words(reason.Figure, room, ref at);
        }
        Text("\",\"contribution\":"u8, room, ref at);
        at += RoundedNumber.Write(reason.Contribution, room[at..]);
        room[at++] = (byte)'}';
        return at;
    }

    private void Words(double figure, Span<byte> room, ref int at)
    {
        if (_words!.PhraseFor(figure) is not { } phrase)
        {
            Text(double.IsNaN(figure) ? _missing : _unknown, room, ref at);
            return;
        }
        var (before, after) = _phrases[phrase];
        Text(before, room, ref at);
        if (phrase.After is null) return;
        phrase.NumberOf(figure).TryFormat(room[at..], out int digits, phrase.Format, CultureInfo.InvariantCulture);
        at += digits;
        Text(after, room, ref at);
    }

    private static void Text(ReadOnlySpan<byte> text, Span<byte> room, ref int at)
    {
        text.CopyTo(room[at..]);
        at += text.Length;
    }
}
