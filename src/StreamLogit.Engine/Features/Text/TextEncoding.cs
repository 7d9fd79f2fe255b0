using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Text;

/// <summary>The n-grams of a text: 1/sqrt(m) at the hashed slot of each of m, or 1 at a dense slot where there is no text.</summary>
/// <remarks>The hash of an n-gram is that of a category value (see <see cref="HashedSlots"/>) of a feature named by <see cref="SeedName"/>.</remarks>
internal sealed class TextEncoding : Feature
{
    private readonly TextFeature _options;
    private readonly int _field;
    private readonly HashedSlots _hashed;
    private readonly CoefficientNames _names;
    private readonly PlainText _words = new();
    private readonly PlainText _characters = new();
    private readonly NGramSet[] _wordSets;
    private readonly NGramSet[] _characterSets;
    private readonly ulong[] _wordSeeds;
    private readonly ulong[] _characterSeeds;

    public TextEncoding(TextFeature options, int field, HashedSlots hashed, CoefficientNames names, int firstSlot)
        : base(firstSlot)
    {
        _options = options;
        _field = field;
        _hashed = hashed;
        _names = names;
        _wordSets = [.. options.WordLengths.Select(_ => new NGramSet(options.Most))];
        _characterSets = [.. options.CharacterLengths.Select(_ => new NGramSet(options.Most))];
        _wordSeeds = [.. options.WordLengths.Select(n => hashed.SeedOf(SeedName(options, n, "words")))];
        _characterSeeds = [.. options.CharacterLengths.Select(n => hashed.SeedOf(SeedName(options, n, "characters")))];
    }

    public override int DenseSlots => 1;

    public override int MaximumEntries => Math.Max(1, _options.Most * (_wordSets.Length + _characterSets.Length));

    public override void Encode(RecordBatch records, int record, VectorBuilder vector)
    {
        ref var value = ref records.Fields(record)[_field];
        if (!value.IsPresent)
        {
            vector.Add(FirstSlot, 1);
            return;
        }
        var text = records.Bytes.Slice(value.TextStart, value.TextLength);
        int found = 0;
        if (_wordSets.Length > 0) _words.TakeWords(text);
        for (int i = 0; i < _wordSets.Length; i++)
            found += Find(_wordSets[i], _words.Bytes, _wordSeeds[i], _options.WordLengths[i], ofWords: true);
        if (_characterSets.Length > 0) _characters.TakeCharacters(text);
        for (int i = 0; i < _characterSets.Length; i++)
            found += Find(_characterSets[i], _characters.Bytes, _characterSeeds[i], _options.CharacterLengths[i], ofWords: false);
        if (found == 0) return;
        double share = 1 / Math.Sqrt(found);
        foreach (var set in _wordSets) Add(set, _words.Bytes, share, vector);
        foreach (var set in _characterSets) Add(set, _characters.Bytes, share, vector);
    }

    public override string NameOf(int denseSlot) => _options.Field + " missing";

    private static string SeedName(TextFeature options, int length, string of) => FormattableString.Invariant($"{options.Name} in {length} {of}");

    /// <summary>Finds the runs of so many words, which single spaces part, or characters.</summary>
    private static int Find(NGramSet set, ReadOnlySpan<byte> text, ulong seed, int length, bool ofWords)
    {
        set.Clear();
        int start = 0, end = 0;
        for (int units = 0; end < text.Length && !set.IsFull;)
        {
            end = EndOfUnit(text, end, ofWords);
            if (++units < length) continue;
            if (units > length) start = EndOfUnit(text, start, ofWords);
            int first = ofWords && text[start] == ' ' ? start + 1 : start;
            set.Add(HashedSlots.Combine(seed, FieldHash.Of(text[first..end])), first, end - first);
        }
        return set.Count;
    }

    /// <summary>The end of the word or character that begins at a place; the space before a word belongs to it.</summary>
    private static int EndOfUnit(ReadOnlySpan<byte> text, int start, bool ofWords)
    {
        int end = start + 1;
        if (ofWords) while (end < text.Length && text[end] != ' ') end++;
        else while (end < text.Length && (text[end] & 0xC0) == 0x80) end++;
        return end;
    }

    private void Add(NGramSet set, ReadOnlySpan<byte> text, double value, VectorBuilder vector)
    {
        foreach (var (hash, start, length) in set.NGrams)
        {
            int slot = _hashed.SlotOf(hash);
            if (!vector.AddHashed(slot, HashedSlots.TagOf(hash), value) || !_names.HasRoom) continue;
            _names.Add(slot, $"{_options.Field}: {Encoding.UTF8.GetString(text.Slice(start, Math.Min(length, CoefficientNames.MaximumTextBytes)))}");
        }
    }
}
