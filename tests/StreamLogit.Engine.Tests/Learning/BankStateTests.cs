using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Tests.Learning;

public sealed class BankStateTests
{
    private const int Features = 7;
    private static readonly LabelledRow[] Rows = RealStreams.Read("birdstrikes")[..3000];

    private static readonly SettingOptions[] EveryRule =
    [
        new SgdSetting(0.1, 0, 1e-6), new SgdSetting(0.5, 0, 0.3), new AdagradSetting(0.05, 3), new FtrlSetting(0.1, 1, 0.1, 0),
        new NewtonSetting(0.999, 1), new SgdSetting(0.3, 0.5, 0) { ForgetHalfLifeMicroseconds = 50 }, new AdagradSetting(0.1, 0),
        new FtrlSetting(0.2, 1, 0, 0) { ForgetHalfLifeMicroseconds = 99 },
    ];

    [Theory]
    [InlineData(0, false)]
    [InlineData(1e-4, true)]
    public void Load_SavedState_GoesOnBitByBit(double switchRate, bool hasWarmStart)
    {
        LearningOptions options = BankStream.Options(EveryRule) with { SwitchRate = switchRate };
        BankStream undisturbed = New(options), resumed = New(options);
        if (hasWarmStart)
        {
            undisturbed.Bank.StartFrom(-1, [0.1, 0, 0, 0, 0, 0, 2]);
            resumed.Bank.StartFrom(-1, [0.1, 0, 0, 0, 0, 0, 2]);
        }
        var saved = new StateBlocks();
        for (int i = 0; i < Rows.Length; i++)
        {
            double expected = undisturbed.Next(Rows[i].Values, Rows[i].Label, i % 3, timeMicroseconds: i);
            Assert.Equal(expected, resumed.Next(Rows[i].Values, Rows[i].Label, i % 3, timeMicroseconds: i));
            if (i % 700 != 0) continue;
            saved = Together(saved, Changes(resumed.Bank));
            resumed = New(options);
            Assert.True(resumed.Bank.Load(saved).IsNone);
        }
        for (int setting = 0; setting < EveryRule.Length; setting++)
        {
            Assert.Equal(undisturbed.Bank.LogLossTotal(setting), resumed.Bank.LogLossTotal(setting));
            Assert.Equal(undisturbed.Bank.BlendWeight(setting), resumed.Bank.BlendWeight(setting));
            Assert.Equal(undisturbed.Bank.Coefficient(0, setting), resumed.Bank.Coefficient(0, setting));
        }
    }

    [Fact]
    public void Save_FewSlotsChanged_WritesFewBlocks()
    {
        var bank = new Bank(BankStream.Options(new AdagradSetting(0.1, 0), new SgdSetting(0.1, 0, 0)), 1 << 16);
        Assert.Empty(Blocks(Changes(bank)));
        Learn(bank, [5, 40_000]);
        Assert.Equal(2, Blocks(Changes(bank)).Count());
        Assert.Empty(Changes(bank).Changes());
        Learn(bank, [5]);
        Assert.Equal(0L, Assert.Single(Blocks(Changes(bank))));

        static void Learn(Bank bank, int[] slots) =>
            bank.Learn(new(slots, new double[slots.Length]), new double[2], false, 1, 1, 0);
    }

    /// <summary>Settings that stay go on; a new one starts from the blend; the weights stay in proportion; the next save replaces the state.</summary>
    [Theory]
    [InlineData(0, 0)]
    [InlineData(1e-3, 0)]
    [InlineData(0, 1e-3)]
    public void Load_ChangedBank_KeepsEqualSettingsAndStartsNewOnesFromTheBlend(double switchRateBefore, double switchRateAfter)
    {
        BankStream before = New(BankStream.Options(EveryRule) with { SwitchRate = switchRateBefore });
        Run(before, 0, 1000);
        var saved = Together(new StateBlocks(), Changes(before.Bank));
        SettingOptions[] settings =
        [
            new FtrlSetting(0.7, 1, 0.5, 0.1), EveryRule[4], EveryRule[1], new SgdSetting(0.9, 0, 0.1), new NewtonSetting(1, 1), EveryRule[7], new AdagradSetting(9, 9),
        ];
        BankStream after = New(BankStream.Options(settings) with { SwitchRate = switchRateAfter });
        BankChange change = after.Bank.Load(saved);

        Assert.False(change.IsNone);
        Assert.Equal([EveryRule[4].Name, EveryRule[1].Name, EveryRule[7].Name], change.Kept);
        Assert.Equal([settings[0].Name, settings[3].Name, settings[4].Name, settings[6].Name], change.Started);
        Assert.Equal(new[] { 0, 2, 3, 5, 6 }.Select(place => EveryRule[place].Name), change.Dropped);
        Assert.Equal([-1, 4, 1, -1, -1, 7, -1], change.SavedPlaces);
        foreach (int started in new[] { 0, 3, 4, 6 })
        {
            Assert.Equal(Blended(s => before.Bank.Intercept(s)), after.Bank.Intercept(started), 1e-12);
            for (int slot = 0; slot < Features; slot++)
                Assert.Equal(Blended(s => before.Bank.Coefficient(slot, s)), after.Bank.Coefficient(slot, started), 1e-12);
            Assert.Equal(1.0 / 7, after.Bank.BlendWeight(started), 1e-12);
            Assert.Equal((0, 0), (after.Bank.LogLossTotal(started), after.Bank.WeightTotal(started)));
        }
        Assert.Equal(
            Math.Log(before.Bank.BlendWeight(4) / before.Bank.BlendWeight(7)), Math.Log(after.Bank.BlendWeight(1) / after.Bank.BlendWeight(5)), 1e-9);
        Assert.Equal(before.Bank.LogLossTotal(1), after.Bank.LogLossTotal(2));

        // Scores of the kept settings go on as if nothing had happened.
        before.Next(Rows[1000].Values, Rows[1000].Label);
        after.Next(Rows[1000].Values, Rows[1000].Label);
        Assert.Equal([before.LogOdds[4], before.LogOdds[1], before.LogOdds[7]], [after.LogOdds[1], after.LogOdds[2], after.LogOdds[5]]);

        // What is saved now, together with what was saved before, is the state of the new bank.
        saved = Together(saved, Changes(after.Bank));
        BankStream again = New(BankStream.Options(settings) with { SwitchRate = switchRateAfter });
        Assert.True(again.Bank.Load(saved).IsNone);
        for (int i = 1001; i < 1500; i++)
            Assert.Equal(after.Next(Rows[i].Values, Rows[i].Label), again.Next(Rows[i].Values, Rows[i].Label));

        double Blended(Func<int, double> number) => Enumerable.Range(0, EveryRule.Length).Sum(s => before.Bank.BlendWeight(s) * number(s));
    }

    [Fact]
    public void Load_DamagedOrForeignState_IsRefused()
    {
        BankStream bank = New(BankStream.Options(EveryRule));
        Run(bank, 0, 10);
        StateBlocks saved = Changes(bank.Bank);
        Assert.Throws<InvalidStateException>(() => New(BankStream.Options(EveryRule)).Bank.Load(new StateBlocks()));
        foreach ((string part, long number, byte[]? bytes) in saved.Changes())
        {
            foreach (byte[] damaged in new[] { bytes![..^1], bytes[..(bytes.Length / 2)], [.. bytes, 0], [] })
            {
                StateBlocks state = Together(new StateBlocks(), saved);
                state.Put(part, number, damaged);
                if (part == "learning/bank" && damaged.Length > bytes.Length) continue; // what follows a layout is ignored
                Assert.Throws<InvalidStateException>(() => New(BankStream.Options(EveryRule)).Bank.Load(state));
            }
        }
        Assert.Throws<InvalidStateException>(() => new Bank(BankStream.Options(EveryRule), Features + 1, 0).Load(saved));
        Assert.Throws<InvalidStateException>(() => new Bank(BankStream.Options(EveryRule), Features, 1).Load(saved));
    }

    private static BankStream New(LearningOptions options) => new(new Bank(options, Features, firstDenseSlot: 0), Features);

    private static void Run(BankStream stream, int from, int to)
    {
        for (int i = from; i < to; i++) stream.Next(Rows[i].Values, Rows[i].Label, timeMicroseconds: i);
    }

    private static StateBlocks Changes(Bank bank)
    {
        var changes = new StateBlocks();
        bank.Save(changes);
        return changes;
    }

    private static IEnumerable<long> Blocks(StateBlocks changes) => changes.Read("learning/coefficients").Select(block => block.Number);

    private static StateBlocks Together(StateBlocks earlier, StateBlocks changes)
    {
        var together = new StateBlocks();
        foreach ((string part, long number, byte[]? bytes) in earlier.Changes().Concat(changes.Changes()))
        {
            if (bytes is null) together.Remove(part, number);
            else together.Put(part, number, bytes);
        }
        return together;
    }
}
