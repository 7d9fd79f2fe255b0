using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health.Drift;
using StreamLogit.Engine.Health.RollUps;
using StreamLogit.Engine.Health.Slices;

namespace StreamLogit.Engine.Health;

/// <summary>Reads figures out of the sums: copies them, so that what is handed out never changes.</summary>
internal sealed class HealthReader
{
    private const long MicrosecondsOfMinute = 60_000_000;

    private readonly HealthOptions _options;
    private readonly ImmutableArray<string> _settingNames;
    private readonly RollUp _stream;
    private readonly SettingShares _settingShares;
    private readonly LastLabels _last;
    private readonly SlicedField[] _slices;
    private readonly DriftLedger _drift;
    private readonly LabelRun _run = new();
    private readonly HistoryCache _history;
    private readonly double[] _numbers;
    private readonly Tally _tally = new(HealthRow.Cells, LogOddsBins.CellWidth);
    private readonly double[] _labelNumbers = new double[LabelSums.Numbers];
    private readonly Tally _labelTally = new(LogOddsBins.Count, LogOddsBins.CellWidth);

    public HealthReader(
        HealthOptions options, ImmutableArray<string> settingNames, HealthRow row, RollUp stream, SettingShares settingShares, LastLabels last,
        SlicedField[] slices, DriftLedger drift)
    {
        (_options, _settingNames, _stream, _settingShares, _last, _slices, _drift) = (options, settingNames, stream, settingShares, last, slices, drift);
        _numbers = new double[row.Numbers];
        _history = new HistoryCache(stream, settingNames);
    }

    /// <summary>The figures with windows that end with a minute.</summary>
    /// <param name="minute">That of the clock.</param>
    /// <param name="clockMicroseconds">The stream's clock.</param>
    /// <param name="openMinutes">How many minutes are open together.</param>
    public HealthSnapshot Read(long minute, long clockMicroseconds, long openMinutes)
    {
        Array.Clear(_numbers);
        _tally.Clear();
        _stream.Total(_numbers, _tally);
        return new HealthSnapshot
        {
            Total = StreamRow.Figures(_numbers, _tally),
            Stream = StreamRow.Stream(_numbers, _tally),
            Windows = [.. _options.Windows.Select(window => WindowOfStream(window, minute, clockMicroseconds, openMinutes)), LastLabelsWindow()],
            Slices = [.. _slices.SelectMany(field => SlicesOf(field, minute))],
            History = _history.History(),
            Reference = _drift.Reference(clockMicroseconds),
        };
    }

    private WindowFigures WindowOfStream(HealthWindow window, long minute, long clockMicroseconds, long openMinutes)
    {
        Array.Clear(_numbers);
        _tally.Clear();
        long minutes = window.LengthMicroseconds / MicrosecondsOfMinute;
        long from = _stream.Window(minute, minutes, _numbers, _tally);
        _settingShares.AddTo(_numbers, openMinutes);
        return new WindowFigures(window.Name, StreamRow.Figures(_numbers, _tally))
        {
            FromMicroseconds = from * MicrosecondsOfMinute,
            Stream = StreamRow.Stream(_numbers, _tally),
            Settings = StreamRow.Settings(_numbers, _settingNames),
            Drift = _drift.Window(minute, minutes, clockMicroseconds),
        };
    }

    private WindowFigures LastLabelsWindow()
    {
        Array.Clear(_labelNumbers);
        _labelTally.Clear();
        ref var sums = ref LabelSums.Of(_labelNumbers);
        for (long number = _last.First; number < _last.Added;)
        {
            _run.Clear();
            while (_run.Count < LabelRun.Capacity && number < _last.Added) _run.Add(_last[number++]);
            _run.ComputeLosses();
            _run.AddTo(ref sums, _labelTally);
        }
        return new WindowFigures(FormattableString.Invariant($"last {_options.LastLabels} labels"), StreamRow.Figures(_labelNumbers, _labelTally));
    }

    private IEnumerable<SliceFigures> SlicesOf(SlicedField field, long minute)
    {
        // The most frequent value first, the rest last.
        foreach (var series in field.Series.OrderByDescending(s => s.RecentEvents)) yield return FiguresOf(field, series, minute);
        yield return FiguresOf(field, field.Rest, minute);
    }

    private SliceFigures FiguresOf(SlicedField field, SliceSeries series, long minute)
    {
        Array.Clear(_labelNumbers);
        _labelTally.Clear();
        series.RollUp.Total(_labelNumbers, _labelTally);
        var total = StreamRow.Figures(_labelNumbers, _labelTally);
        return new SliceFigures(
            field.Path, series.Text, total, [.. _options.Windows.Select(window => WindowOfSlice(series.RollUp, window, minute))], series.History());
    }

    private WindowFigures WindowOfSlice(RollUp rollUp, HealthWindow window, long minute)
    {
        Array.Clear(_labelNumbers);
        _labelTally.Clear();
        long from = rollUp.Window(minute, window.LengthMicroseconds / MicrosecondsOfMinute, _labelNumbers, _labelTally);
        return new WindowFigures(window.Name, StreamRow.Figures(_labelNumbers, _labelTally)) { FromMicroseconds = from * MicrosecondsOfMinute };
    }
}
