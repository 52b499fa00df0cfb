/**
 * A monitor under attack, and a comparison that nobody can argue with.
 *
 * <p><b>The promise.</b> While the instances of a monitor are killed, stopped, frozen and thawed, added and removed, and
 * while their broker is stopped or killed and comes back with its disk, every event that the broker has acknowledged is
 * counted exactly once. In the end
 * <ul>
 *   <li>trials and successes of every window, partition, epoch and variant, and the number of events in every outcome,
 *       equal the truth, which the side that made the events has kept unit by unit;
 *   <li>every decision record and every notice, byte for byte and in its order, equals that of an undisturbed monitor over
 *       the same topic, with each sequence number once and the chain of hashes unbroken;
 *   <li>every notice has been delivered at least once;
 *   <li>after each fault the monitor catches up by itself, an instance that is told to stop does so in good time, and none
 *       ends without being told.
 * </ul>
 *
 * <p><b>What is not covered.</b>
 * <ul>
 *   <li>Loss of acknowledged data: there is one broker with one disk, which is killed but keeps what it has written.
 *       Replication, a change of leader, a full disk and a machine that loses its page cache are Kafka's to survive.
 *   <li>Transactions that the broker itself forgets. One Kafka node (4.4.0) that goes down, in good order or not, while a
 *       transaction is ending may come back without the markers that end it in the partitions: its coordinator then says
 *       that the transaction is over, and the partitions hold it open for good. The monitor stands still there and says so,
 *       and the run ends as not done in time; {@code --spare-broker} leaves these faults out.
 *   <li>A network that is cut between some and not others, or that delays; here every process is whole, frozen or gone.
 *   <li>Clocks that jump, partitions that fall silent and are sealed for idleness (the wall clock would decide what is
 *       late), and topics that are deleted or grow.
 *   <li>Changes of configuration, plan or version while running.
 *   <li>Counting by view: all plans here count units.
 *   <li>Exactly one delivery of a webhook, which nobody can promise: a notice may be delivered again under the same id.
 * </ul>
 *
 * <p>{@link io.tallyward.demo.chaos.ChaosRun} tells it from the start to the report; {@link io.tallyward.demo.chaos.Fault}
 * says what is done to whom, {@link io.tallyward.demo.chaos.FaultDeck} in which order,
 * {@link io.tallyward.demo.chaos.Fleet} and {@link io.tallyward.demo.chaos.BrokerProcess} hold the victims, and
 * {@link io.tallyward.demo.chaos.Recoveries} watches from outside, by committed offsets, when they have recovered. Which
 * faults come, to whom and after how many events follows from the seed; to which instruction of the victim they come does
 * not.
 */
package io.tallyward.demo.chaos;
