using System.Collections.Immutable;
using BenchmarkDotNet.Attributes;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Benchmarks.Learning;

/// <summary>Scoring and learning of rows with 12 dense features, for each update rule. The times are those of one row, for all settings together.</summary>
[MemoryDiagnoser]
public class BankBenchmarks
{
    private const int Rows = 8192;
    private readonly EncodedRows _rows = new(Rows, hashedSlots: 0, hashedEntries: 0);
    private Bank _bank = null!;
    private double[] _logOdds = [];
    private double[] _scored = [];

    /// <summary>The update rule of all settings.</summary>
    [Params("sgd", "sgd-power", "sgd-overshoot-proof", "adagrad", "adagrad-forgetting", "ftrl", "newton")]
    public string Rule { get; set; } = "";

    [Params(1, 4, 16)]
    public int Settings { get; set; }

    [GlobalSetup]
    public void Prepare()
    {
        ImmutableArray<SettingOptions> bank = [.. Enumerable.Range(1, Settings).Select(Setting)];
        _bank = new Bank(new LearningOptions { Bank = bank }, _rows.SlotCount, _rows.FirstDenseSlot);
        _logOdds = new double[Settings];
        _scored = new double[Settings * Rows];
        Score();
    }

    /// <summary>Scores, and learns at once.</summary>
    [Benchmark(OperationsPerInvoke = Rows)]
    public void ScoreAndLearn()
    {
        for (int row = 0; row < Rows; row++)
        {
            EncodedVector x = _rows[row];
            _bank.Score(in x, 0, _logOdds);
            _bank.Learn(in x, _logOdds, isFresh: true, _rows.Label(row), 1, 0);
        }
    }

    /// <summary>Scores only.</summary>
    [Benchmark(OperationsPerInvoke = Rows)]
    public void Score()
    {
        for (int row = 0; row < Rows; row++)
        {
            EncodedVector x = _rows[row];
            _bank.Score(in x, 0, _scored.AsSpan(row * Settings, Settings));
        }
    }

    /// <summary>Learns labels of events that were scored long ago, as late labels do.</summary>
    [Benchmark(OperationsPerInvoke = Rows)]
    public void LearnLate()
    {
        for (int row = 0; row < Rows; row++)
        {
            EncodedVector x = _rows[row];
            _bank.Learn(in x, _scored.AsSpan(row * Settings, Settings), isFresh: false, _rows.Label(row), 1, 0);
        }
    }

    private SettingOptions Setting(int i) => Rule switch
    {
        "sgd" => new SgdSetting(0.002 * i, 0, 1e-6),
        "sgd-power" => new SgdSetting(0.02 * i, 0.25, 0),
        "sgd-overshoot-proof" => new SgdSetting(0.002 * i, 0, 0) { IsOvershootProof = true },
        "adagrad" => new AdagradSetting(0.01 * i, 0),
        "adagrad-forgetting" => new AdagradSetting(0.01 * i, 1000),
        "ftrl" => new FtrlSetting(0.1 * i, 1, 0.1, 0.1),
        _ => new NewtonSetting(1 - 1e-4 * i, 1),
    };
}
