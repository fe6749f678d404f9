import { type Server } from 'socket.io';
import { type LiveNews, type LiveNewsName } from '#shared/contract/live-socket';
import { type SiteStates } from '#shared/contract/site-state';
import { type Ground } from '../ground';
import { changesFor, statesFor, type Audience } from './audience';
import { type ChangesRead } from './changes-read';
import { type LiveLink } from './live-link';
import { openChannel, type NetworkChannel } from './network-channel';

/** What a hub stands on. */
export interface HubGround extends Pick<Ground, 'db' | 'log'> {
  readonly io: Server;
  readonly readStates: (networkId: number) => SiteStates;
}

interface Followers {
  readonly audience: Audience;
  readonly links: Set<LiveLink>;
}

interface FollowedNetwork {
  readonly channel: NetworkChannel;
  /** By what they see; the key is that of their room. */
  readonly followers: Map<string, Followers>;
  isDue: boolean;
  statesTold: string;
}

/** Tells the followers of each network what changes: read once a network and change, written once for all who see the same. */
export class LiveHub {
  private readonly networks = new Map<number, FollowedNetwork>();
  private isOpen = true;

  constructor(private readonly ground: HubGround) {}

  /** Takes a follower in; what it is told begins behind the number that comes back. */
  follow(link: LiveLink, networkId: number, audience: Audience): number {
    const network = this.networks.get(networkId) ?? this.open(networkId);
    this.bringUp(networkId);
    const followers = network.followers.get(audience.key) ?? { audience, links: new Set() };
    network.followers.set(audience.key, followers);
    followers.links.add(link);
    return network.channel.last();
  }

  /** Tells everybody what there is, so that what is answered next and what is told after it do not overlap. */
  bringUp(networkId: number): void {
    const channel = this.networks.get(networkId)?.channel;
    while (channel?.step() === true);
  }

  leave(link: LiveLink, networkId: number): void {
    const network = this.networks.get(networkId);
    if (!network) return;
    for (const [key, { links }] of network.followers) if (links.delete(link) && links.size === 0) network.followers.delete(key);
    if (network.followers.size === 0) this.networks.delete(networkId);
  }

  /** A network may have changed: it is looked at as soon as the thread is free, once however often this is said. */
  changed(networkId: number): void {
    const network = this.networks.get(networkId);
    if (!network || network.isDue) return;
    network.isDue = true;
    setImmediate(() => this.look(network));
  }

  /** Looks at all networks, since not every commit is said: commands write beside the server. */
  lookAtAll(): void {
    for (const networkId of this.networks.keys()) this.changed(networkId);
  }

  /** Tells how the sites do, where that is news. */
  tellStates(): void {
    for (const [networkId, network] of this.networks)
      this.safely('the states of sites were not read', () => {
        const states = this.ground.readStates(networkId);
        const text = JSON.stringify(states.sites);
        if (text === network.statesTold) return;
        network.statesTold = text;
        for (const { audience } of network.followers.values()) this.tell(audience.key, 'site:states', statesFor(audience, states));
      });
  }

  close(): void {
    this.isOpen = false;
    this.networks.clear();
  }

  private open(networkId: number): FollowedNetwork {
    const channel = openChannel(this.ground.db, networkId, (read) => this.publish(network, read));
    const network: FollowedNetwork = { channel, followers: new Map(), isDue: false, statesTold: '' };
    this.networks.set(networkId, network);
    return network;
  }

  /** One message at a time: what else waits for the thread comes between. */
  private look(network: FollowedNetwork): void {
    network.isDue = false;
    if (!this.isOpen) return;
    this.safely('changes were not read', () => {
      if (network.channel.step()) this.changed(network.channel.networkId);
    });
  }

  private publish({ followers }: FollowedNetwork, read: ChangesRead): void {
    for (const { audience, links } of followers.values()) {
      const news = changesFor(audience, read);
      this.tell(audience.key, 'network:changed', news);
      for (const link of links) link.wasTold(news);
    }
  }

  private tell<K extends LiveNewsName>(room: string, name: K, news: LiveNews[K]): void {
    this.ground.io.to(room).emit(name, news);
  }

  private safely(what: string, work: () => void): void {
    try {
      work();
    } catch (fault) {
      this.ground.log.error({ err: fault }, what);
    }
  }
}
