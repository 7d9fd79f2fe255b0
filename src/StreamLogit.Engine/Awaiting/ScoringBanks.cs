using System.Collections.Immutable;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// Which bank scored the events of which segments. Between two runs a definition may change its bank; events that an earlier bank scored then
/// have other log-odds than the present settings.
/// </summary>
internal sealed class ScoringBanks
{
    private const string Part = "awaiting/banks";
    private readonly ImmutableArray<string> _settings;
    private readonly double[] _logOdds;
    private readonly List<Era> _eras = []; // oldest first; the last one is the present bank's
    private int _savedEras;

    /// <param name="settings">The names of the present bank's settings.</param>
    public ScoringBanks(ImmutableArray<string> settings)
    {
        _settings = settings;
        _logOdds = new double[settings.Length];
        _eras.Add(new Era(0, settings, null));
    }

    /// <summary>The first segment that takes events of the present bank.</summary>
    public int FirstOfPresent => _eras[^1].FirstSegment;

    /// <summary>How many log-odds the events of a segment have.</summary>
    public int SettingsOf(int segment) => EraOf(segment).Settings.Length;

    /// <summary>
    /// The log-odds of every present setting for an event: its own, or where the bank that scored the event did not have it, those that were
    /// published. Valid until the next call.
    /// </summary>
    public ReadOnlySpan<double> LogOddsOf(KeptEvent scored, int segment)
    {
        if (EraOf(segment).Places is not { } places) return scored.LogOdds;
        for (int setting = 0; setting < places.Length; setting++)
            _logOdds[setting] = places[setting] < 0 ? scored.Header.LogOdds : scored.LogOdds[places[setting]];
        return _logOdds;
    }

    public void Save(StateBlocks changes, int firstSegment)
    {
        for (; _savedEras < _eras.Count; _savedEras++) changes.Put(Part, _eras[_savedEras].FirstSegment, ToBytes(_eras[_savedEras].Settings));
        while (_eras.Count > 1 && _eras[1].FirstSegment <= firstSegment)
        {
            changes.Remove(Part, _eras[0].FirstSegment);
            _eras.RemoveAt(0);
            _savedEras--;
        }
    }

    /// <param name="state">The state.</param>
    /// <param name="nextSegment">The number of the segment behind the last one in the state.</param>
    public void Load(StateBlocks state, int nextSegment)
    {
        _eras.Clear();
        foreach ((long first, byte[] bytes) in state.Read(Part))
        {
            ImmutableArray<string> settings = Read(bytes);
            _eras.Add(new Era((int)first, settings, settings.SequenceEqual(_settings) ? null : [.. _settings.Select(name => settings.IndexOf(name))]));
        }
        if (_eras.Count == 0) throw new InvalidStateException($"the state has no {Part}");
        _savedEras = _eras.Count;
        if (_eras[^1].Places is null) return;

        // Where no event lies between two changes, the later one takes the place of the earlier.
        if (_eras[^1].FirstSegment == nextSegment)
        {
            _eras.RemoveAt(_eras.Count - 1);
            _savedEras--;
        }
        _eras.Add(new Era(nextSegment, _settings, null));
    }

    private Era EraOf(int segment)
    {
        for (int i = _eras.Count - 1; i > 0; i--)
            if (_eras[i].FirstSegment <= segment) return _eras[i];
        return _eras[0];
    }

    private static byte[] ToBytes(ImmutableArray<string> settings)
    {
        using var stream = new MemoryStream();
        using var writer = new BinaryWriter(stream);
        writer.Write(settings.Length);
        foreach (string name in settings) writer.Write(name);
        writer.Flush();
        return stream.ToArray();
    }

    private static ImmutableArray<string> Read(byte[] bytes)
    {
        using var reader = new BinaryReader(new MemoryStream(bytes));
        return [.. Enumerable.Range(0, reader.ReadInt32()).Select(_ => reader.ReadString())];
    }

    /// <param name="FirstSegment">The first segment whose events this bank scored.</param>
    /// <param name="Settings">Its settings.</param>
    /// <param name="Places">For each present setting its place among them, or -1; null where they are the present ones.</param>
    private sealed record Era(int FirstSegment, ImmutableArray<string> Settings, int[]? Places);
}
