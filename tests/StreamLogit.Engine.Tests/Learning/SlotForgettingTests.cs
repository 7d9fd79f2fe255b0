using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests.Learning;

/// <summary>Slots with half-lives of their own, whatever feature they belong to.</summary>
public sealed class SlotForgettingTests
{
    private const int Slots = 12;
    private const long HalfLife = 5_000;

    private static readonly SettingOptions[] EveryRule =
    [
        new SgdSetting(0.1, 0, 1e-3), new SgdSetting(0.5, 0.3, 0), new SgdSetting(3, 0, 0) { IsOvershootProof = true }, new AdagradSetting(0.1, 0),
        new AdagradSetting(0.3, 20), new FtrlSetting(0.1, 1, 0, 0), new FtrlSetting(0.3, 1, 0.4, 0.1),
    ];

    private static readonly long[] Mixed = [0, 700, 3_000, 0, 20, 100_000, 9_000, 0, 1, 50_000, 700, 3_000];

    /// <summary>What the settings do to all coefficients at every label is here done to each when its turn comes: it must come to the same.</summary>
    [Theory]
    [InlineData(true)]
    [InlineData(false)]
    public void Learn_AllSlotsWithOneHalfLife_EqualsSettingsWithIt(bool isFresh)
    {
        var bySetting = Stream([.. EveryRule.Select(setting => setting with { ForgetHalfLifeMicroseconds = HalfLife })], null);
        var bySlot = Stream(EveryRule, _ => HalfLife);
        foreach (var row in Rows(3000))
        {
            bySetting.Next(row, isFresh);
            bySlot.Next(row, isFresh);
            for (int setting = 0; setting < EveryRule.Length; setting++) AssertClose(bySetting.LogOdds[setting], bySlot.LogOdds[setting]);
        }
        for (int slot = 0; slot < Slots; slot++)
            for (int setting = 0; setting < EveryRule.Length; setting++) AssertClose(bySetting.Bank.Coefficient(slot, setting), bySlot.Bank.Coefficient(slot, setting));
    }

    [Fact]
    public void Learn_SlotAndSettingForget_EqualsTheirRatesTogether()
    {
        var both = Stream([.. EveryRule.Select(setting => setting with { ForgetHalfLifeMicroseconds = 3 * HalfLife })], _ => 3 * HalfLife / 2);
        var together = Stream(EveryRule, _ => HalfLife);
        foreach (var row in Rows(2000))
        {
            both.Next(row);
            together.Next(row);
            for (int setting = 0; setting < EveryRule.Length; setting++) AssertClose(together.LogOdds[setting], both.LogOdds[setting]);
        }
    }

    [Theory]
    [InlineData(1)]
    [InlineData(3)]
    [InlineData(7)]
    [InlineData(16)]
    public void Learn_EveryWidth_GivesTheSameBits(int settings)
    {
        SettingOptions[] bank = [.. Enumerable.Range(0, settings).Select(i => EveryRule[(i + 3) % EveryRule.Length] with { ForgetHalfLifeMicroseconds = i / EveryRule.Length * 9000 })];
        var expected = Run(1);
        foreach (int lanes in new[] { 2, 4, 8 }) Assert.Equal(expected, Run(lanes));

        List<double> Run(int lanes)
        {
            var stream = Stream(bank, slot => Mixed[slot], lanes);
            var numbers = new List<double>();
            foreach (var row in Rows(1500))
            {
                numbers.Add(stream.Next(row, isFresh: row.Time % 3 != 0));
                numbers.AddRange(stream.LogOdds);
            }
            return numbers;
        }
    }

    /// <summary>A score without a label, reasons, and looks at the model write nothing.</summary>
    [Fact]
    public void Score_AnyNumberOfTimes_ChangesNoBit()
    {
        TimedStream quiet = Stream(EveryRule, slot => Mixed[slot]), watched = Stream(EveryRule, slot => Mixed[slot]);
        double[] logOdds = new double[EveryRule.Length], coefficients = new double[Slots];
        int[] all = [.. Enumerable.Range(0, Slots)];
        foreach (var row in Rows(1000))
        {
            watched.Bank.Score(new EncodedVector(all, Enumerable.Repeat(1.0, Slots).ToArray()), row.Time, logOdds);
            watched.Bank.PublishedCoefficients(new EncodedVector(all, new double[Slots]), coefficients);
            for (int slot = 0; slot < Slots; slot++)
                Assert.Equal(Enumerable.Range(0, EveryRule.Length).Sum(s => watched.Bank.BlendWeight(s) * watched.Bank.Coefficient(slot, s)), coefficients[slot], 1e-13);
            Assert.Equal(quiet.Next(row), watched.Next(row));
        }
    }

    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void Load_SavedState_GoesOnBitByBit(bool hasWarmStart)
    {
        TimedStream undisturbed = Stream(EveryRule, slot => Mixed[slot]), resumed = Stream(EveryRule, slot => Mixed[slot]);
        if (hasWarmStart)
            foreach (var stream in new[] { undisturbed, resumed }) stream.Bank.StartFrom(-1, [.. Enumerable.Range(0, Slots).Select(slot => 0.1 * slot)]);
        var saved = new StateBlocks();
        int labels = 0;
        foreach (var row in Rows(2000))
        {
            Assert.Equal(undisturbed.Next(row), resumed.Next(row));
            if (labels++ % 97 != 0) continue;
            resumed.Bank.Save(saved);
            resumed = Stream(EveryRule, slot => Mixed[slot]);
            Assert.True(resumed.Bank.Load(saved).IsNone);
        }
    }

    [Fact]
    public void Load_StateWithoutALabel_GoesOnBitByBit()
    {
        var saved = new StateBlocks();
        Stream(EveryRule, slot => Mixed[slot]).Bank.Save(saved);
        TimedStream undisturbed = Stream(EveryRule, slot => Mixed[slot]), resumed = Stream(EveryRule, slot => Mixed[slot]);
        resumed.Bank.Load(saved);
        foreach (var row in Rows(100)) Assert.Equal(undisturbed.Next(row), resumed.Next(row));
    }

    /// <summary>The old half-lives count up to the last label that the state has learned, the new ones from there on, also if the definition has none any more.</summary>
    [Theory]
    [InlineData(0, 2_000)]
    [InlineData(2_000, 6_000)]
    [InlineData(2_000, 0)]
    [InlineData(0, 0)]
    public void Load_OtherHalfLife_CountsFromThen(long before, long after)
    {
        // Slot 3 keeps its half-life; the others change it.
        Func<int, long>? HalfLives(long others) => others == 0 ? null : slot => slot == 3 ? 0 : others;
        var first = Stream(EveryRule, HalfLives(before));
        var rows = Rows(1200);
        foreach (var row in rows[..800]) first.Next(row);
        var saved = new StateBlocks();
        first.Bank.Save(saved);

        var second = Stream(EveryRule, HalfLives(after));
        second.Bank.Load(saved);
        foreach (int slot in Enumerable.Range(0, Slots))
            for (int setting = 0; setting < EveryRule.Length; setting++) Assert.Equal(first.Bank.Coefficient(slot, setting), second.Bank.Coefficient(slot, setting), 1e-15);

        double[] then = [.. Enumerable.Range(0, Slots).Select(slot => second.Bank.Coefficient(slot, 1))];
        long elapsed = 3_000;
        second.Bank.Learn(new EncodedVector([], []), new double[EveryRule.Length], false, 1, 0, rows[799].Time + elapsed);
        for (int slot = 0; slot < Slots; slot++)
            Assert.Equal(then[slot] * (after == 0 || slot == 3 ? 1 : Math.Pow(2, -(double)elapsed / after)), second.Bank.Coefficient(slot, 1), 1e-14);

        // Killed and started again, it goes on.
        second.Bank.Save(saved);
        var again = Stream(EveryRule, HalfLives(after));
        again.Bank.Load(saved);
        foreach (var row in rows[800..])
            Assert.Equal(second.Next(row with { Time = row.Time + elapsed }), again.Next(row with { Time = row.Time + elapsed }));
        Assert.Equal(after > 0, saved.Read(SlotForgetting.Part).Any());
    }

    [Fact]
    public void Load_IntoABankWithNewton_StartsItFromWhatIsLeft()
    {
        var first = Stream(EveryRule, slot => Mixed[slot]);
        foreach (var row in Rows(800)) first.Next(row);
        var saved = new StateBlocks();
        first.Bank.Save(saved);
        var second = Stream([EveryRule[0], new NewtonSetting(1, 1)], null);
        second.Bank.Load(saved);
        for (int slot = 0; slot < Slots; slot++)
        {
            Assert.Equal(first.Bank.Coefficient(slot, 0), second.Bank.Coefficient(slot, 0), 1e-15);
            Assert.Equal(Enumerable.Range(0, EveryRule.Length).Sum(s => first.Bank.BlendWeight(s) * first.Bank.Coefficient(slot, s)), second.Bank.Coefficient(slot, 1), 1e-13);
        }
    }

    [Fact]
    public void Load_DamagedState_IsRefused()
    {
        var stream = Stream(EveryRule, slot => Mixed[slot]);
        foreach (var row in Rows(10)) stream.Next(row);
        var saved = new StateBlocks();
        stream.Bank.Save(saved);
        byte[] bytes = saved.Find(SlotForgetting.Part, 0)!;
        saved.Put(SlotForgetting.Part, 0, bytes.AsSpan(1));
        Assert.Throws<InvalidStateException>(() => Stream(EveryRule, slot => Mixed[slot]).Bank.Load(saved));
        saved.Put(SlotForgetting.Part, 0, bytes);
        saved.Put(SlotForgetting.Part, 1, bytes);
        Assert.Throws<InvalidStateException>(() => Stream(EveryRule, slot => Mixed[slot]).Bank.Load(saved));
    }

    /// <summary>A thousand half-lives leave nothing, and nothing comes back, neither of a coefficient nor of what FTRL-Proximal makes it of.</summary>
    [Fact]
    public void Learn_AfterMoreHalfLivesThanADoubleHolds_StartsFromZero()
    {
        var stream = Stream(EveryRule, _ => 1);
        var x = new TimedRow([0, 1], [1, 2], 1, 0);
        for (int i = 0; i < 50; i++) stream.Next(x with { Time = i % 2 });
        Assert.All(Enumerable.Range(0, EveryRule.Length), setting => Assert.NotEqual(0, stream.Bank.Coefficient(1, setting)));
        stream.Next(x with { Weight = 0, Time = 1_000_000_000 });
        Assert.All(Enumerable.Range(0, EveryRule.Length), setting => Assert.Equal(0, stream.Bank.Coefficient(1, setting)));
        stream.Next(x with { Weight = 0, Time = 1_000_000_001 });
        Assert.All(Enumerable.Range(0, EveryRule.Length), setting => Assert.Equal(0, stream.Bank.Coefficient(1, setting)));
    }

    [Fact]
    public void ScoreAndLearn_ExtremeRecords_StayFinite()
    {
        SettingOptions[] bank = [new SgdSetting(1e6, 0, 0), new AdagradSetting(1e6, 0.5), new FtrlSetting(1e6, 1e-3, 1e3, 0), .. EveryRule];
        var stream = Stream(bank, slot => Mixed[slot]);
        var random = new Random(9);
        double[] extremes = [1e15, -1e15, 1e-300, 5e-324, 0, 1, -1, 1e8];
        for (int i = 0; i < 5_000; i++)
        {
            double[] values = [.. Enumerable.Range(0, 6).Select(_ => extremes[random.Next(extremes.Length)])];
            int[] slots = [.. Enumerable.Range(0, 6).Select(_ => random.Next(Slots))];
            Assert.True(double.IsFinite(stream.Next(new TimedRow(slots, values, i % 2, i * (i % 100 == 0 ? 1_000_000_000_000 : 1), i % 7 == 0 ? 1e6 : 1), i % 3 > 0)));
            Assert.All(stream.LogOdds, z => Assert.True(double.IsFinite(z), $"label {i}"));
        }
    }

    [Fact]
    public void ScoreAndLearn_WarmedUp_AllocateNothing()
    {
        var stream = Stream(EveryRule, slot => Mixed[slot]);
        var rows = Rows(2000);
        double[] coefficients = new double[8];
        long round = 0;
        Once();
        long least = long.MaxValue;
        for (int repeat = 0; repeat < 6; repeat++)
        {
            long start = GC.GetAllocatedBytesForCurrentThread();
            Once();
            // The runtime may allocate once when it replaces code by better code.
            least = Math.Min(least, GC.GetAllocatedBytesForCurrentThread() - start);
        }
        Assert.Equal(0, least);

        void Once()
        {
            round++;
            foreach (var row in rows)
            {
                stream.Next(row with { Time = row.Time + round * 10_000_000 }, row.Time % 2 == 0);
                stream.Bank.PublishedCoefficients(new EncodedVector(row.Slots, row.Values), coefficients);
            }
        }
    }

    [Fact]
    public void Bank_Newton_IsRefused() => Assert.Throws<ArgumentException>(() => Stream([new NewtonSetting(1, 1)], _ => HalfLife));

    private static TimedStream Stream(SettingOptions[] settings, Func<int, long>? halfLifeOf, int widestLanes = RowWidth.Widest) =>
        new(new Bank(BankStream.Options(settings) with { SwitchRate = 1e-3 }, Slots, firstDenseSlot: 0, widestLanes, halfLifeOf));

    // Slots occur rarely or often, and some twice in an event; several labels may share a time.
    private static TimedRow[] Rows(int count)
    {
        var random = new Random(11);
        var rows = new TimedRow[count];
        long time = 1_700_000_000_000_000;
        for (int i = 0; i < count; i++)
        {
            int[] slots = [.. Enumerable.Range(0, 5).Select(_ => (int)(Slots * random.NextDouble() * random.NextDouble()))];
            double[] values = [.. slots.Select(_ => random.NextDouble() * 2 - 0.5)];
            double logOdds = slots.Zip(values, (slot, value) => value * (slot % 3 - 1) * (i / 400 % 2 == 0 ? 1 : -1)).Sum();
            rows[i] = new TimedRow(slots, values, random.NextDouble() < PlainRules.Sigmoid(logOdds) ? 1 : 0, time, i % 4 == 0 ? 2.5 : 1);
            time += i % 5 == 0 ? 0 : random.Next(i % 50 == 0 ? 20_000 : 500);
        }
        return rows;
    }

    private static void AssertClose(double expected, double actual) =>
        Assert.True(Math.Abs(actual - expected) <= 1e-10 * Math.Max(1, Math.Abs(expected)), $"{actual} instead of {expected}");

    private readonly record struct TimedRow(int[] Slots, double[] Values, int Label, long Time, double Weight = 1);

    private sealed class TimedStream(Bank bank)
    {
        public Bank Bank { get; } = bank;

        public double[] LogOdds { get; } = new double[bank.SettingCount];

        public double Next(TimedRow row, bool isFresh = true)
        {
            var x = new EncodedVector(row.Slots, row.Values);
            double published = Bank.Score(in x, row.Time, LogOdds);
            Bank.Learn(in x, LogOdds, isFresh, row.Label, row.Weight, row.Time);
            return published;
        }
    }
}
